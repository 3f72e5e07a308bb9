"""Physical constants (SI, exact since 2019) and the temperatures that data sheets refer to."""

from __future__ import annotations

ELEMENTARY_CHARGE = 1.602176634e-19  #: q [C]
BOLTZMANN = 1.380649e-23  #: k [J/K]
PLANCK = 6.62607015e-34  #: h [J s]
LIGHT_SPEED = 299792458.0  #: c [m/s]
ZERO_CELSIUS = 273.15  #: 0 °C [K]
ROOM_TEMPERATURE = ZERO_CELSIUS + 25  #: at which data sheets state typical figures [K]
