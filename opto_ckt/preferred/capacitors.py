"""Ceramic capacitors: what their dielectric code says, what it leaves out, and the voltage ratings."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from opto_ckt.constants import ZERO_CELSIUS


@dataclass(frozen=True, kw_only=True)
class Dielectric:
    """One ceramic by its EIA code.

    Parameters
    ----------
    class_number : 1 for stable ceramics, 2 for high permittivity. [1]
    temperature_low, temperature_high : between which the code holds. [K]
    change_low, change_high : of the capacitance, against 25 °C, over that range. [1]
    temperature_coefficient : of class 1, nominal; None for class 2, which has no slope to speak of. [1/K]
    temperature_coefficient_tolerance : either way around it; None for class 2. [1/K]
    ageing : lowest and highest loss for each decade of hours; None where no figure is printed. [1]
    """

    class_number: int
    temperature_low: float
    temperature_high: float
    change_low: float
    change_high: float
    temperature_coefficient: float | None = None
    temperature_coefficient_tolerance: float | None = None
    ageing: tuple[float, float] | None = None

    @property
    def fit_for_signal(self) -> bool:
        """Whether it may stand in a feedback, filter or timing position; common practice: class 1 only."""
        return self.class_number == 1


_ROOM = 25.0
_LOWEST = {"X": -55.0, "Y": -30.0, "Z": 10.0}
_HIGHEST = {"5": 85.0, "6": 105.0, "7": 125.0, "8": 150.0}
_CHANGES = {
    "P": (-0.10, 0.10), "R": (-0.15, 0.15), "S": (-0.22, 0.22),
    "T": (-0.33, 0.22), "U": (-0.56, 0.22), "V": (-0.82, 0.22),
}  # fmt: skip
_AGEING = {"X7R": (0.01, 0.04), "X5R": (0.01, 0.04), "Y5V": (0.06, 0.10)}


def _class_1(coefficient: float, tolerance: float, ageing: tuple[float, float] | None) -> Dielectric:
    """-55 °C to 125 °C, the range of the class from memory; the changes are the extremes at its two ends."""
    low, high = -55.0, 125.0
    slopes = (coefficient - tolerance, coefficient + tolerance)
    edges = [slope * (end - _ROOM) for slope in slopes for end in (low, high)]
    return Dielectric(
        class_number=1,
        temperature_low=ZERO_CELSIUS + low,
        temperature_high=ZERO_CELSIUS + high,
        change_low=min(edges),
        change_high=max(edges),
        temperature_coefficient=coefficient,
        temperature_coefficient_tolerance=tolerance,
        ageing=ageing,
    )


def _class_2(low: str, high: str, change: str) -> Dielectric:
    return Dielectric(
        class_number=2,
        temperature_low=ZERO_CELSIUS + _LOWEST[low],
        temperature_high=ZERO_CELSIUS + _HIGHEST[high],
        change_low=_CHANGES[change][0],
        change_high=_CHANGES[change][1],
        ageing=_AGEING.get(low + high + change),
    )


_C0G = _class_1(0.0, 30e-6, (0.0, 0.0))

DIELECTRICS: Mapping[str, Dielectric] = {
    "C0G": _C0G,
    "NP0": _C0G,
    "U2J": _class_1(-750e-6, 120e-6, None),
    **{low + high + change: _class_2(low, high, change) for low in _LOWEST for high in _HIGHEST for change in _CHANGES},
}
"""Every class 2 code that the letters allow, and the class 1 codes in use.

Source: EIA letter codes and ageing as printed by Holy Stone, p. 53. The temperature range of class 1 is from memory.
"""


@dataclass(frozen=True, kw_only=True)
class BiasMeasurement:
    """The loss of one class 2 capacitor under dc voltage: a measured point, not a law; the code says nothing of it."""

    dielectric: str
    size: str
    nominal: float  #: [F]
    rated_voltage: float  #: [V]
    bias: float  #: [V]
    measured: float  #: [F]

    @property
    def change(self) -> float:
        """Against the nominal value. [1]"""
        return self.measured / self.nominal - 1


DC_BIAS_MEASUREMENTS: tuple[BiasMeasurement, ...] = (
    BiasMeasurement(dielectric="X7R", size="0805", nominal=4.7e-6, rated_voltage=16, bias=12, measured=1.5e-6),
    BiasMeasurement(dielectric="X7R", size="1206", nominal=4.7e-6, rated_voltage=16, bias=12, measured=3.4e-6),
)
"""Source: M. Fortunato, EDN, 26 November 2012. Within one size a higher rating hardly helps; a larger size does."""

VOLTAGE_RATINGS: tuple[float, ...] = (4.0, 6.3, 10.0, 16.0, 25.0, 35.0, 50.0, 63.0, 100.0, 250.0, 500.0, 1000.0)
"""Common ratings. [V]"""

CLASS_2_VOLTAGE_FACTOR = 2.0  #: rating over stress, because of the loss under dc voltage; common practice
CLASS_1_VOLTAGE_FACTOR = 1.25  #: rating over stress; common practice


def voltage_rating_above(stress: float, factor: float = CLASS_2_VOLTAGE_FACTOR) -> float | None:
    """The smallest common rating that is at least `factor` times the stress; None above the last. [V] -> [V]

    >>> voltage_rating_above(5.0), voltage_rating_above(5.0, CLASS_1_VOLTAGE_FACTOR), voltage_rating_above(900.0)
    (10.0, 6.3, None)
    """
    return next((rating for rating in VOLTAGE_RATINGS if rating >= factor * stress * (1 - 1e-12)), None)
