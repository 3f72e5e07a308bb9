"""Data of an optical fibre, as far as launching and receiving light needs it."""

from __future__ import annotations

from typing import Annotated, ClassVar

from opto_ckt.parts.record import Choice, Record, Sheet, Spread, Unit


class FibreData(Record):
    """Optical fibre: multimode by its core and numerical aperture, single mode by its mode field."""

    section: ClassVar[str] = "fibre"

    core: Annotated[Spread, Unit("m", "50 µm"), Sheet("core diameter")]
    numerical_aperture: Annotated[Spread | None, Unit("1", "0.2"), Sheet("numerical aperture, NA")] = None
    mode_field_diameter: Annotated[Spread | None, Unit("m", "9.2 µm"), Sheet("mode field diameter, MFD")] = None

    choices = (Choice("what the fibre accepts", (("numerical_aperture",), ("mode_field_diameter",))),)
