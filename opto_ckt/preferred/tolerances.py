"""Tolerance letters of IEC 60062."""

from __future__ import annotations

from collections.abc import Mapping

RELATIVE_LETTERS: Mapping[str, float] = {
    "B": 0.001, "C": 0.0025, "D": 0.005, "F": 0.01, "G": 0.02, "J": 0.05, "K": 0.1, "M": 0.2,
}  # fmt: skip
"""Of the value. [1]"""

ABSOLUTE_LETTERS: Mapping[str, float] = {"B": 0.1e-12, "C": 0.25e-12, "D": 0.5e-12, "F": 1e-12}
"""Capacitors below 10 pF, either way [F]; F is from memory."""


def tolerance_letter(tolerance: float, *, absolute: bool = False) -> str:
    """The IEC 60062 letter of a symmetrical tolerance, empty where it has none; `absolute` for farads below 10 pF.

    >>> tolerance_letter(0.01), tolerance_letter(0.1e-12, absolute=True), tolerance_letter(0.03)
    ('F', 'B', '')
    """
    letters = ABSOLUTE_LETTERS if absolute else RELATIVE_LETTERS
    return next((letter for letter, own in letters.items() if abs(tolerance - own) <= 1e-9 * own), "")
