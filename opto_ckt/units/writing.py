"""Writing a value: engineering notation with SI prefix and a stated number of significant digits."""

from __future__ import annotations

import math
from itertools import takewhile

from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.units.table import UNITS
from opto_ckt.units.unit import Step

_PLAIN_FROM, _PLAIN_BELOW = -4, 6  #: powers of ten within which a figure is written without an exponent


def write(value: float, unit: str, digits: int = 3, *, trim: bool = False) -> str:
    """A value on paper: `digits` significant, none before the decimal point ever rounded away.

    Temperatures come in kelvin and are written in °C with at most one decimal; decibels get `digits` - 1 decimals
    (one fewer from 100 dB on). `trim` drops trailing zeros, as part values are written.
    Raises KeyError for a unit that is not in the table.

    >>> write(9.312e6, "Hz"), write(24300, "Ω"), write(348.15, "°C"), write(5, "V"), write(10e3, "Ω", trim=True)
    ('9.31 MHz', '24.3 kΩ', '75 °C', '5.00 V', '10 kΩ')
    >>> write(999.96e3, "Hz"), write(1310e-9, "m"), write(1e-4, "1/K", trim=True), write(0.5, "dB")
    ('1.00 MHz', '1310 nm', '100 ppm/K', '0.50 dB')
    """
    definition = UNITS[unit]
    value = float(value)
    if not math.isfinite(value):
        return _joined(_unbounded(value), _zero_step(definition.steps).text)
    if unit == "°C":
        return _joined(_trimmed(f"{value - ZERO_CELSIUS:.1f}"), unit)
    if definition.decimals:
        figure = f"{value:.{max(0, digits - 1 - (abs(value) >= 100))}f}"
        return _joined(_trimmed(figure) if trim or not value else _unsigned_zero(figure), definition.steps[0].text)
    if not value:
        return _joined("0", _zero_step(definition.steps).text)
    figure, step = _figure(abs(value), definition.steps, digits)
    return _joined(("-" if value < 0 else "") + (_trimmed(figure) if trim else figure), step.text)


def percent(value: float, digits: int = 3) -> str:
    """A ratio as a percentage, without trailing zeros.

    >>> percent(0.01), percent(0.005), percent(-0.3)
    ('1 %', '0.5 %', '-30 %')
    """
    if not value or not math.isfinite(value):
        return "0 %" if not value else f"{_unbounded(value)} %"
    figure, _ = _figure(abs(value), (Step("%", -2, 0.0),), digits)
    return ("-" if value < 0 else "") + _trimmed(figure) + " %"


def dbm(watts: float, decimals: int = 1) -> str:
    """An optical power in decibels above one milliwatt; no light at all is -∞ dBm. [W]

    >>> dbm(50e-6), dbm(0)
    ('-13.0 dBm', '-∞ dBm')
    """
    if not 0 <= watts < math.inf:
        return "undefined"
    return "-∞ dBm" if watts == 0 else _unsigned_zero(f"{10 * math.log10(watts / 1e-3):.{decimals}f}") + " dBm"


def _figure(magnitude: float, steps: tuple[Step, ...], digits: int) -> tuple[str, Step]:
    """The decimal figure and the step it is written in; rounded first, so that 999.96 kHz is one megahertz."""
    rounded = float(f"{magnitude:.{digits - 1}e}")
    step = [steps[0], *takewhile(lambda one: one.least <= rounded, steps)][-1]
    exponent = int(f"{rounded:e}".split("e")[1])
    before = exponent - step.exponent + 1  # digits before the decimal point
    if not _PLAIN_FROM < before <= _PLAIN_BELOW + 1:
        step = next((one for one in steps if one.exponent == 0), step)
        mantissa, power = f"{magnitude:.{digits - 1}e}".split("e")
        return f"{mantissa}e{int(power) - step.exponent}", step
    mantissa, power = f"{magnitude:.{max(digits, before) - 1}e}".split("e")
    figures = mantissa.replace(".", "")
    if before <= 0:
        return "0." + "0" * -before + figures, step
    before = int(power) - step.exponent + 1
    return figures[:before] + ("." + figures[before:] if figures[before:] else ""), step


def _unbounded(value: float) -> str:
    return "undefined" if math.isnan(value) else "∞" if value > 0 else "-∞"


def _trimmed(figure: str) -> str:
    """Without trailing zeros behind the point; the exponent stays."""
    mantissa, mark, power = figure.partition("e")
    if "." in mantissa:
        mantissa = mantissa.rstrip("0").rstrip(".")
    return _unsigned_zero(mantissa) + mark + power


def _unsigned_zero(figure: str) -> str:
    return figure.removeprefix("-") if not figure.strip("-0.") else figure


def _zero_step(steps: tuple[Step, ...]) -> Step:
    return next((step for step in steps if step.exponent == 0), steps[0])


def _joined(figure: str, symbol: str) -> str:
    return figure + symbol if symbol == "°" else f"{figure} {symbol}".rstrip()
