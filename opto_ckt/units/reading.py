"""Reading a value: one number, one unit, one meaning; whatever could be read two ways is refused."""

from __future__ import annotations

import math
import re
from collections.abc import Mapping

from opto_ckt.units import rkm
from opto_ckt.units.table import UNITS, folded, spellings
from opto_ckt.units.unit import PREFIXES, UnitError

_NUMBER = re.compile(r"([+-]?)([0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE]([+-]?[0-9]+))?(.*)", re.DOTALL)
_SAME_SIGNS = str.maketrans({
    "\u2212": "-", "\u03bc": "µ", "\u2126": "Ω", "\u212a": "K", "\u00ba": "°", "\u02da": "°", "\u2103": "°C",
    "\u00a0": " ", "\u2009": " ", "\u202f": " ",
})  # fmt: skip
_LONGEST_SHOWN = 60  #: characters of a wrong text that a message repeats
_LONGEST_READ = 100  #: characters that any value may have

HINTS: Mapping[tuple[str, str], str] = {
    ("°C", "C"): "C alone is the coulomb; write °C",
    ("°C", ""): "a temperature needs °C or K",
    ("K", "°C"): "a temperature difference is given in K, because °C would read as a point on the scale",
    ("K", "degC"): "a temperature difference is given in K, because degC would read as a point on the scale",
    ("K/W", "C/W"): "C alone is the coulomb; write K/W or °C/W",
    ("dB", ""): "write dB",
    ("Ω", "R"): "write Ω, or the code without a space, such as 470R",
    ("s", "S"): "S is the siemens; write s",
}
_BAUD = "baud counts symbols, not bits; write bit/s"
_BYTES = "B is the byte; write bit/s"
_MEG = "'meg' belongs to simulators; write M"
HINT_PATTERNS: tuple[tuple[str, re.Pattern[str], str], ...] = (
    ("bit/s", re.compile(r"[kMGT]?[Bb](au)?d", re.ASCII), _BAUD),
    ("bit/s", re.compile(r"[kKMGT]?B(/s|ps)|[kMGT]?bytes?/s"), _BYTES),
    ("", re.compile(r"[mM](eg|EG).*"), _MEG),
)


def read(text: str | int | float, unit: str) -> float:
    """The SI number of a value that an engineer wrote; temperatures in °C come back in kelvin, decibels as ratios.

    `dBm` is read where the unit is W, `dB` where it is V/V (20 log) or W/W (10 log); a field in dB stays in dB.
    A number without a unit is refused except where the unit is a ratio. Codes of IEC 60062 are read for Ω, F and H
    where their letter leaves one meaning. Raises UnitError, whose message does not name the field.

    >>> read("4.7 kΩ", "Ω"), read("4k7", "Ω"), read("0.36pF", "F"), read("25 °C", "°C"), read("5 %", "1")
    (4700.0, 4700.0, 3.6e-13, 298.15, 0.05)
    >>> read("230 MHx", "Hz")
    Traceback (most recent call last):
    opto_ckt.units.unit.UnitError: '230 MHx' has the unknown unit 'MHx'; a figure in Hz is expected, such as '230 MHz'
    """
    definition = UNITS[unit]
    if isinstance(text, bool) or not isinstance(text, (str, int, float)):
        raise UnitError(f"{_shown(text)} is not a value; {_expected(unit)}")
    if not isinstance(text, str):
        return _bare(text, unit)
    written = text.strip().translate(_SAME_SIGNS).strip()
    if len(written) > _LONGEST_READ:
        raise UnitError(f"{_shown(text)} is too long; {_expected(unit)}")
    if rkm.unmistakable(code := written.removesuffix(unit), unit):
        return rkm.read_rkm(code, unit)
    match = _NUMBER.fullmatch(written)
    if match is None:
        raise UnitError(f"{_shown(text)} {_no_number(written)}; {_expected(unit)}")
    sign, digits, exponent, rest = match.groups()
    spelling = re.sub(r" *([/√]) *", r"\1", rest.strip())
    if curve := definition.curves.get(spelling):
        try:
            value = curve(float(f"{sign}{digits}e{exponent or 0}"))
        except OverflowError:
            value = math.inf
    elif scale := spellings(unit).get(spelling):
        value = scale[0] * float(f"{sign}{digits}e{int(exponent or 0) + scale[1]}")
    else:
        raise UnitError(f"{_shown(text)} {_wrong_unit(sign + digits, spelling, rest, unit)}; {_expected(unit)}")
    return _possible(value, text, digits, unit)


def _bare(number: int | float, unit: str) -> float:
    if not UNITS[unit].bare:
        raise UnitError(f"{_shown(number)} has no unit; {_expected(unit)}")
    try:
        value = float(number)
    except OverflowError:
        value = math.inf
    if not math.isfinite(value):
        raise UnitError(f"{_shown(number)} is not a finite figure; {_expected(unit)}")
    return value


def _possible(value: float, text: str, digits: str, unit: str) -> float:
    lost = value == 0 and unit != "°C" and any(digit in "123456789" for digit in digits)
    if lost or not math.isfinite(value):
        raise UnitError(f"{_shown(text)} is beyond any figure; {_expected(unit)}")
    if unit == "°C" and value < 0:
        raise UnitError(f"{_shown(text)} is below absolute zero; {_expected(unit)}")
    return value + 0.0  # no negative zero


def _expected(unit: str) -> str:
    example = " or ".join(f"'{one}'" for one in UNITS[unit].example.split(" or "))
    return f"a {'ratio' if unit == '1' else f'figure in {unit}'} is expected, such as {example}"


def _shown(text: object) -> str:
    shown = repr(text)
    return shown if len(shown) <= _LONGEST_SHOWN else f"{shown[:_LONGEST_SHOWN]}…"


def _no_number(written: str) -> str:
    if not written:
        return "is empty"
    return "does not begin with a number"


def _wrong_unit(number: str, spelling: str, rest: str, unit: str) -> str:
    """What is wrong with a text whose number was read and whose unit was not."""
    if re.match(r",[0-9]", spelling):
        return _comma(number, spelling)
    if re.match(r"[ '_’/±–~…-]*[0-9]", rest):
        return "has two numbers, or a thousands separator; write one number, without separators"
    if hint := HINTS.get((unit, spelling)):
        return f"is refused: {hint}"
    for of, pattern, hint in HINT_PATTERNS:
        if of in ("", unit) and pattern.fullmatch(spelling):
            return f"is refused: {hint}"
    if not spelling:
        return "has no unit"
    if spelling in {*PREFIXES, "K"}:
        return _prefix_alone(number, spelling, unit)
    if same := folded(unit).get(spelling.lower()):
        meant = " or ".join(f"'{one}'" for one in same)
        return f"has the unknown unit {_shown(spelling)}; upper and lower case differ, write {meant}"
    return f"has the unknown unit {_shown(spelling)}"


def _comma(number: str, spelling: str) -> str:
    fraction = re.match(r",([0-9]+)(.*)", spelling, re.DOTALL)
    digits, behind = fraction.groups() if fraction else ("", "")
    if "." in number or "," in behind or "." in behind:
        return "has a comma; write one number with a decimal point and without thousands separators"
    if len(digits) == 3:
        return f"has a comma that may mean {number}.{digits} or {number}{digits}; write the one that is meant"
    return f"has a decimal comma; write {number}.{digits}{behind}"


def _prefix_alone(number: str, prefix: str, unit: str) -> str:
    """What to write for a figure that ends in a prefix: the unit, or the code that carries it."""
    kilo = prefix.replace("K", "k")
    if unit == "Ω" and prefix in "mM":
        return f"could be read two ways; write '{number} MΩ' or '{number} mΩ'"
    if kilo + unit not in spellings(unit):
        return f"has the prefix {prefix} but no unit"
    code = number.replace(".", kilo) if "." in number else f"{number}{kilo}0"
    other = f" or '{code}'" if rkm.unmistakable(code, unit) else ""
    return f"has the prefix {prefix} but no unit; write '{number} {kilo}{unit}'{other}"
