"""Chip resistors by size: what each bears, how that falls with temperature, and what it adds to the circuit."""

from __future__ import annotations

import math
from bisect import bisect_right
from collections.abc import Mapping
from dataclasses import dataclass

from opto_ckt.constants import ZERO_CELSIUS


@dataclass(frozen=True, kw_only=True)
class ChipResistor:
    """One size of thick-film chip in its standard grade.

    Parameters
    ----------
    power : rated dissipation up to the knee. [W]
    voltage : largest working voltage, whatever the resistance. [V]
    knee_temperature : ambient up to which the rating holds. [K]
    zero_power_temperature : ambient at which nothing may be dissipated. [K]
    thermal_resistance : film to ambient on a board; None where no figure is printed. [K/W]
    body_capacitance : across the resistance, pads and traces apart. [F]
    """

    power: float
    voltage: float
    knee_temperature: float = ZERO_CELSIUS + 70
    zero_power_temperature: float = ZERO_CELSIUS + 155
    thermal_resistance: float | None
    body_capacitance: float


CHIP_RESISTORS: Mapping[str, ChipResistor] = {
    "0201": ChipResistor(
        power=1 / 20, voltage=25.0, zero_power_temperature=ZERO_CELSIUS + 125,
        thermal_resistance=None, body_capacitance=0.0206e-12,
    ),
    "0402": ChipResistor(power=1 / 16, voltage=50.0, thermal_resistance=870.0, body_capacitance=0.0262e-12),
    "0603": ChipResistor(power=1 / 16, voltage=50.0, thermal_resistance=550.0, body_capacitance=0.0403e-12),
    "0805": ChipResistor(power=1 / 10, voltage=150.0, thermal_resistance=440.0, body_capacitance=0.2e-12),
    "1206": ChipResistor(power=1 / 8, voltage=200.0, thermal_resistance=220.0, body_capacitance=0.2e-12),
    "1210": ChipResistor(power=1 / 4, voltage=200.0, thermal_resistance=170.0, body_capacitance=0.2e-12),
    "2010": ChipResistor(power=1 / 2, voltage=200.0, thermal_resistance=140.0, body_capacitance=0.2e-12),
    "2512": ChipResistor(power=1.0, voltage=200.0, thermal_resistance=110.0, body_capacitance=0.2e-12),
}  # fmt: skip
"""Sizes in inch code, smallest first.

Power, voltage and the derating line: type sheets of thick-film chips (Multicomp 1/16 W 50 V; Yageo RC0603, whose 100 V
overload is 2 × 50 V); the same sizes are also sold in a raised grade. Thermal resistance: Vishay TNPW e3 data sheet.
Body capacitance to 0603: Vishay, "Frequency response of thin film chip resistors", table 1, flip-chip terminations
(0.0392 pF for a 0402 with wrap-around ones). From 0805 up that table is silent: 0.2 pF, given as typical of an 0805 by
Texas Instruments, THS4631 data sheet SLOS451B, p. 10, is taken for every larger size as well.
"""

POWER_RATINGS: tuple[float, ...] = tuple(sorted({chip.power for chip in CHIP_RESISTORS.values()}))
"""The ratings of the chip sizes. [W]"""

_NOISE_STEPS = (100.0, 1e3, 10e3, 100e3, 1e6)
_NOISE_LIMITS = (10.0, 20.0, 30.0, 40.0, 46.0, 48.0)
_NOISE_LAST = 22e6


def derated_power(power: float, ambient: float, knee: float, zero: float) -> float:
    r"""What may be dissipated at an ambient temperature: the straight line from the knee down to zero.

    .. math:: P = P_{knee} \frac{T_0 - T}{T_0 - T_{knee}}, \quad 0 \le P \le P_{knee}

    Power in W, temperatures in K. Source: derating curve of chip-resistor data sheets.

    >>> round(derated_power(0.1, 373.15, 343.15, 428.15), 7)
    0.0647059
    """
    return power * min(1.0, max(0.0, (zero - ambient) / (zero - knee)))


def working_voltage(size: str, resistance: float) -> float:
    """The smaller of √(P R) and the size's own limit. [Ω] -> [V]; KeyError for a size that is not in the table.

    >>> working_voltage("0603", 1e3), working_voltage("0603", 1e6)
    (7.905694150420948, 50.0)
    """
    chip = CHIP_RESISTORS[size]
    return min(math.sqrt(chip.power * resistance), chip.voltage)


def power_rating_above(stress: float, factor: float = 2.0) -> float | None:
    """The smallest chip rating that is at least `factor` times the stress; None where no chip has one. [W] -> [W]

    Loading a resistor to half of its rating is common practice, not a standard's demand.

    >>> power_rating_above(0.06), power_rating_above(0.6)
    (0.125, None)
    """
    return next((rating for rating in POWER_RATINGS if rating >= factor * stress * (1 - 1e-12)), None)


def chip_for(power: float, voltage: float, ambient: float, smallest: str) -> str | None:
    """The smallest size, from a given one up, loaded to half of what it bears at an ambient; None where none does.

    Power in W, voltage in V, temperature in K; loading to half of the rating is common practice.

    >>> chip_for(0.06, 75.0, 298.15, "0603"), chip_for(0.06, 75.0, 358.15, "0603"), chip_for(3.0, 5.0, 298.15, "0603")
    ('1206', '1210', None)
    """
    sizes = list(CHIP_RESISTORS)
    for name in sizes[sizes.index(smallest) :]:
        chip = CHIP_RESISTORS[name]
        borne = derated_power(chip.power, ambient, chip.knee_temperature, chip.zero_power_temperature)
        if 2 * power <= borne and voltage <= chip.voltage:
            return name
    return None


def excess_noise_index(resistance: float) -> float | None:
    """Largest 1/f noise of a thick-film chip, in dB above 1 µV per volt and frequency decade. [Ω] -> [dB]

    None above 22 MΩ, where no limit is printed; a boundary value gets the higher limit.
    Source: IEC 60115-1, 4.12, limits as printed in the Yageo RC0603 data sheet.

    >>> excess_noise_index(470e3), excess_noise_index(47.0)
    (46.0, 10.0)
    """
    if not 0 <= resistance <= _NOISE_LAST:
        return None
    return _NOISE_LIMITS[bisect_right(_NOISE_STEPS, resistance)]
