"""Physical constants, each once, with its unit in the name and its source beside it.

CODATA 2018 and the Review of Particle Physics are quoted from memory; the tests hold every
value here against scipy.constants and the particle package, which carry their own copies.
"""

from __future__ import annotations

import math

# CODATA 2018 (Tiesinga et al. 2021, Rev. Mod. Phys. 93, 025010)
HBAR_C_MEV_CM = 197.3269804e-13
HBAR_MEV_S = 6.582119569e-22
ALPHA = 1 / 137.035999084
ELECTRON_MASS_MEV = 0.51099895
PROTON_MASS_MEV = 938.27208816
NEUTRON_MASS_MEV = 939.56542052
ATOMIC_MASS_MEV = 931.49410242
AVOGADRO_PER_MOL = 6.02214076e23  # exact in the SI

# Review of Particle Physics 2022 (Workman et al., PTEP 2022, 083C01)
FERMI_CONSTANT_PER_MEV2 = 1.1663788e-11
CHARGED_PION_MASS_MEV = 139.57039
MUON_MASS_MEV = 105.6583755
PROTON_MOMENT = 2.7928473446  # nuclear magnetons
NEUTRON_MOMENT = -1.91304273
ANOMALOUS_MOMENT_DIFFERENCE = PROTON_MOMENT - 1.0 - NEUTRON_MOMENT  # kappa_p - kappa_n

# exact conversions: the SI electronvolt, the IAU 2015 parsec
MEV_PER_ERG = 1e-13 / 1.602176634e-19
CM_PER_KPC = 648000 / math.pi * 149597870700e2 * 1e3
LIGHT_CM_PER_S = 2.99792458e10  # exact in the SI
# nominal solar mass parameter of the IAU 2015 over Newton's constant, in grams
SOLAR_MASS_G = 1.98841e33
# GM/c² of the Sun, of the nominal solar mass parameter 1.3271244e20 m³/s²
SOLAR_RADIUS_OF_GRAVITY_CM = 1.3271244e26 / LIGHT_CM_PER_S**2
GRAM_MEV = LIGHT_CM_PER_S**2 * MEV_PER_ERG  # energy of a gram at rest, MeV
