"""Physical constants in the units used throughout the program."""

import math

#: Molar gas constant, kJ/(mol K). CODATA 2018 (exact since the 2019 SI: 8.314 462 618 153 24 J/(mol K)).
GAS_CONSTANT = 8.314_462_618_153_24e-3

#: Faraday constant, kJ/(mol V) = kC/mol. CODATA 2018 (exact: 96 485.332 123 310 0184 C/mol).
FARADAY_CONSTANT = 96.485_332_123_310_02

LN10 = math.log(10.0)

#: Temperature to which tabulated formation energies refer, K (25 °C).
TABLE_TEMPERATURE = 298.15

#: 0 °C in K.
ZERO_CELSIUS = 273.15
