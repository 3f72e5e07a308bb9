"""Comparison by relative error alone."""

from __future__ import annotations

from typing import Any

import pytest


def near(expected: Any, rel: float = 1e-6) -> Any:
    """As `pytest.approx`, without its absolute 1e-12, beside which every picofarad is the same.

    >>> 2e-12 == pytest.approx(1.5e-12), 2e-12 == near(1.5e-12)
    (True, False)
    """
    return pytest.approx(expected, rel=rel, abs=0.0)
