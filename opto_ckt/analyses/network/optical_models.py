"""Small-signal models of what turns light into current, and current into light."""

from __future__ import annotations

from math import pi

from opto_ckt.analyses.network.element_model import Parts, model_of, named, one, own, shot, signal_of, thermal
from opto_ckt.analyses.network.primitives import Primitive, Value
from opto_ckt.topology import GROUND, LaserDiode, Photodiode


@model_of.register
def _(element: Photodiode) -> Parts:
    """Junction (C, shunt) behind its series resistance; light enters through the pole of the transit time."""
    ref, junction, light = element.ref, f"{element.ref}.junction", f"{element.ref}.light"
    inside = (element.cathode, junction)
    transit = named(f"{ref}.transit_frequency")
    responsivity = named(f"{ref}.responsivity")
    return (
        (
            Primitive("R", f"{ref}.transit_r", (light, GROUND), one),
            Primitive("C", f"{ref}.transit_c", (light, GROUND), lambda v: 1 / (2 * pi * transit(v))),
            Primitive("G", f"{ref}.photocurrent", (*inside, light, GROUND), responsivity),
            own("C", element, "capacitance", inside),
            own("R", element, "shunt_resistance", inside),
            own("R", element, "series_resistance", (junction, element.anode)),
        ),
        (
            shot(f"{ref} signal shot", inside, named(f"{ref}.signal_shot")),
            shot(f"{ref} ambient shot", inside, named(f"{ref}.ambient_shot")),
            shot(f"{ref} dark shot", inside, named(f"{ref}.dark_shot")),
            thermal(f"{ref} shunt", inside, named(f"{ref}.shunt_resistance")),
            thermal(f"{ref} series", (junction, element.anode), named(f"{ref}.series_resistance")),
        ),
    )


@signal_of.register
def _(element: Photodiode) -> tuple[tuple[str, str], Value]:
    return (GROUND, f"{element.ref}.light"), one


@model_of.register
def _(element: LaserDiode) -> Parts:
    ends = (element.anode, element.cathode)
    return (own("R", element, "series_resistance", ends), own("C", element, "capacitance", ends)), ()
