"""Bands of wavelength that optical links over single-mode fibre are named by."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

BANDS: Mapping[str, tuple[float, float]] = MappingProxyType(
    {
        "O": (1260e-9, 1360e-9),
        "E": (1360e-9, 1460e-9),
        "S": (1460e-9, 1530e-9),
        "C": (1530e-9, 1565e-9),
        "L": (1565e-9, 1625e-9),
        "U": (1625e-9, 1675e-9),
    }
)
"""From and to [m]; ITU-T G series supplement 39, as six secondary sources quote it"""


def band_of(wavelength: float) -> str:
    """Name of the band that a wavelength [m] lies in; empty outside of all.

    >>> band_of(1310e-9), band_of(1550e-9), band_of(850e-9)
    ('O', 'C', '')
    """
    return next((name for name, (low, high) in BANDS.items() if low <= wavelength < high), "")
