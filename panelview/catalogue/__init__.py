"""What is known: metabolites, steps, constants, matrices, effectors, published values.

Read from `resources/` by `load.py`, checked row by row, immutable afterwards. Nothing here knows a
specimen.
"""
