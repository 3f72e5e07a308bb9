"""Value codes of IEC 60062, in which a letter stands at the decimal point: 4K7, 470R, 4n7.

The letters are those of the table in https://en.wikipedia.org/wiki/RKM_code.
"""

from __future__ import annotations

import re
from collections.abc import Mapping

from opto_ckt.units.unit import UnitError

_CODE = re.compile(r"([0-9]*)([A-Za-zµ])([0-9]*)")
_SMALL = {"p": -12, "n": -9, "u": -6, "µ": -6, "m": -3}
READ: Mapping[str, Mapping[str, int]] = {
    "Ω": {"L": -3, "R": 0, "K": 3, "k": 3, "M": 6, "G": 9, "T": 12},
    "F": {**_SMALL, "F": 0},
    "H": {**_SMALL, "H": 0},
}
WRITTEN: Mapping[str, Mapping[str, int]] = {  # smallest first
    "Ω": {"L": -3, "R": 0, "K": 3, "M": 6, "G": 9, "T": 12},
    "F": {"p": -12, "n": -9, "u": -6, "m": -3, "F": 0},
    "H": {"p": -12, "n": -9, "u": -6, "m": -3, "H": 0},
}
_FROM = {"R": -1}  #: power of ten from which a letter is used, where that is below its own: R47
_ZEROS = {"Ω": "0R", "F": "0p", "H": "0n"}
_LEADING = frozenset("RLpnuµ")  #: letters that have one meaning even with no digit before them
_TRAILING = frozenset("Rpnuµ")  #: letters that have one meaning even with no digit behind them


def read_rkm(code: str, unit: str) -> float:
    """The value of an IEC 60062 code for Ω, F or H, in that unit.

    Raises UnitError for anything else; `R005` and `5L0` are both five milliohms.

    >>> read_rkm("4K7", "Ω"), read_rkm("R47", "Ω"), read_rkm("4n7", "F")
    (4700.0, 0.47, 4.7e-09)
    """
    match = _CODE.fullmatch(code.replace("\u03bc", "µ"))
    letters = READ.get(unit, {})
    if match is None or match[2] not in letters or not match[1] + match[3]:
        raise UnitError(f"{code!r} is not an IEC 60062 code of a value in {unit}")
    whole, letter, fraction = match.groups()
    return float(f"{whole or '0'}.{fraction or '0'}e{letters[letter]}")


def unmistakable(code: str, unit: str) -> bool:
    """Whether a text is a code that carries its unit: the letter at the decimal point, or one that means nothing else.

    >>> [code for code in ("4k7", "470R", "R47", "10k", "1M", "1m") if unmistakable(code, "Ω")]
    ['4k7', '470R', 'R47']
    """
    match = _CODE.fullmatch(code)
    if match is None or match[2] not in READ.get(unit, {}):
        return False
    whole, letter, fraction = match.groups()
    return bool(whole or letter in _LEADING) and bool(fraction or letter in _TRAILING) and bool(whole or fraction)


def write_rkm(value: float, unit: str) -> str:
    """The IEC 60062 code of a value in Ω, F or H, with every figure that the number has.

    From 0.1 Ω up a resistance below 1 kΩ takes R (`R47`, `470R`), below that L for milliohms (`5L0`, `47L`);
    capacitances below 1 pF take a leading p (`p36`).
    Raises UnitError for a negative or unbounded value and for any other unit.

    >>> [write_rkm(value, "Ω") for value in (0.005, 0.47, 4.7, 470.0, 4700.0, 10e3, 4.7e6)]
    ['5L0', 'R47', '4R7', '470R', '4K7', '10K', '4M7']
    >>> [write_rkm(value, "F") for value in (3.6e-13, 1.5e-12, 100e-9, 1e-6)]
    ['p36', '1p5', '100n', '1u0']
    """
    if unit not in WRITTEN or not 0 <= value < float("inf"):
        raise UnitError(f"{value} {unit} has no IEC 60062 code")
    if value == 0:
        return _ZEROS[unit]
    shortest = next(text for places in range(17) if float(text := f"{value:.{places}e}") == value)
    mantissa, power = shortest.split("e")
    digits, exponent = mantissa.replace(".", ""), int(power)
    letters = WRITTEN[unit]
    fitting = [letter for letter, own in letters.items() if exponent >= _FROM.get(letter, own)]
    letter = fitting[-1] if fitting else next(iter(letters))
    point = exponent - letters[letter] + 1  # digits before the letter
    if point <= 0:
        return letter + "0" * -point + digits
    whole, fraction = digits[:point].ljust(point, "0"), digits[point:].rstrip("0")
    return f"{whole}{letter}{fraction or ('0' if point == 1 else '')}"
