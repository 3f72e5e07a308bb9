"""What makes a function a formula: keyword-only SI inputs, branch-free, with its source attached."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeVar

import numpy as np
from numpy.typing import NDArray

Real = float | NDArray[np.float64]
"""A figure in SI units: one number, or an array with one entry a lane."""

Formula = TypeVar("Formula", bound=Callable[..., Any])


def source(text: str) -> Callable[[Formula], Formula]:
    """Attach where a formula comes from; printed beside every value that the formula gave.

    >>> @source("definition")
    ... def area(*, width: Real, height: Real) -> Real:
    ...     return width * height
    >>> source_of(area)
    'definition'
    """

    def attach(function: Formula) -> Formula:
        function.__dict__["source"] = text
        return function

    return attach


def source_of(function: Callable[..., Any]) -> str:
    """The source attached to a formula; empty where there is none."""
    return str(function.__dict__.get("source", ""))
