"""What can be bought: preferred values, chip sizes and their ratings, dielectrics, tolerance codes."""

from __future__ import annotations

from opto_ckt.preferred.capacitors import (
    CLASS_1_VOLTAGE_FACTOR,
    CLASS_2_VOLTAGE_FACTOR,
    DC_BIAS_MEASUREMENTS,
    DIELECTRICS,
    VOLTAGE_RATINGS,
    BiasMeasurement,
    Dielectric,
    voltage_rating_above,
)
from opto_ckt.preferred.resistors import (
    CHIP_RESISTORS,
    POWER_RATINGS,
    ChipResistor,
    chip_for,
    derated_power,
    excess_noise_index,
    power_rating_above,
    working_voltage,
)
from opto_ckt.preferred.series import (
    SERIES,
    Series,
    commonness,
    decade,
    nearest,
    neighbours,
    series_for_tolerance,
    values,
)
from opto_ckt.preferred.tolerances import ABSOLUTE_LETTERS, RELATIVE_LETTERS, tolerance_letter

__all__ = [
    "ABSOLUTE_LETTERS",
    "CHIP_RESISTORS",
    "CLASS_1_VOLTAGE_FACTOR",
    "CLASS_2_VOLTAGE_FACTOR",
    "DC_BIAS_MEASUREMENTS",
    "DIELECTRICS",
    "POWER_RATINGS",
    "RELATIVE_LETTERS",
    "SERIES",
    "VOLTAGE_RATINGS",
    "BiasMeasurement",
    "ChipResistor",
    "Dielectric",
    "Series",
    "chip_for",
    "commonness",
    "decade",
    "derated_power",
    "excess_noise_index",
    "nearest",
    "neighbours",
    "power_rating_above",
    "series_for_tolerance",
    "tolerance_letter",
    "values",
    "voltage_rating_above",
    "working_voltage",
]
