"""A printed figure, equal to everything that rounds to its digits."""

from __future__ import annotations

from decimal import Decimal


class Printed:
    """A figure as a page shows it: it stands for everything within half of its last digit."""

    __array_ufunc__ = None  # numpy leaves the comparison to this class
    __hash__ = None  # type: ignore[assignment]  # equality is not transitive

    def __init__(self, figure: str) -> None:
        number = Decimal(figure)
        exponent = number.as_tuple().exponent
        if not isinstance(exponent, int):
            raise ValueError(f"expected a finite figure, got {figure!r}")
        half = Decimal((0, (5,), exponent - 1))
        self.figure = figure
        self.low, self.high = float(number - half), float(number + half)

    def __eq__(self, other: object) -> bool:
        return self.low <= float(other) <= self.high  # type: ignore[arg-type]  # anything that is not a number raises

    def __repr__(self) -> str:
        return f"{self.figure} (from {self.low!r} to {self.high!r})"


def printed(figure: str) -> Printed:
    """Everything that rounds to the printed digits.

    >>> 5.4249e-12 == printed("5.42e-12"), 5.4251e-12 == printed("5.42e-12")
    (True, False)
    >>> 233.3 == printed("233"), 0.29 == printed("0.3"), 0.29 == printed("0.30")
    (True, True, False)
    """
    return Printed(figure)
