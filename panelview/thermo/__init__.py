"""Physics on arrays: transformed Gibbs energies at any pH, temperature, ionic strength and pMg.

Numpy only. Nothing here knows the name of an enzyme or opens a file. Energies are kJ/mol,
concentrations mol/L, temperatures K.
"""
