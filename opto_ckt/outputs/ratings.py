"""Values, tolerances and loads of parts as they are printed."""

from __future__ import annotations

from collections.abc import Mapping

from opto_ckt.result import FoundPart
from opto_ckt.units import percent, write

LOAD_UNITS: Mapping[str, str] = {"power": "W", "voltage": "V", "current": "A"}
NEGLIGIBLE: Mapping[str, float] = {"power": 1e-12, "voltage": 1e-6, "current": 1e-12}
"""Loads below this are no load: no rating is so small."""
UNNAMED = "not named"  #: a part whose figures stand in the design file without a name


def value_text(part: FoundPart) -> str:
    """What is fitted: the preferred value, the name of a part bought by name, or that the place stays empty."""
    if not part.fitted:
        return "not fitted"
    return (part.part or UNNAMED) if part.value is None else write(part.value, part.unit, 4, trim=True)


def tolerance_text(part: FoundPart) -> str:
    """Tolerance of the part, as a share or, of small capacitors, in farads; empty where it has none."""
    if part.absolute_tolerance is not None:
        return f"±{write(part.absolute_tolerance, part.unit or 'F', trim=True)}"
    return "" if part.tolerance is None else f"±{percent(part.tolerance)}"


def loads_text(loads: Mapping[str, float]) -> str:
    """Power, voltage and current in that order; what is next to nothing is left out.

    >>> loads_text({"voltage": 2.0, "power": 1.6e-4})
    '160 µW, 2 V'
    """
    return ", ".join(
        write(loads[name], unit, trim=True)
        for name, unit in LOAD_UNITS.items()
        if abs(loads.get(name, 0.0)) > NEGLIGIBLE[name]
    )
