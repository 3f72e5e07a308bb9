"""Small-signal models of what turns light into current, and current into light."""

from __future__ import annotations

from math import pi

from opto_ckt.analyses.network.element_model import Parts, model_of, named, one, own, shot, signal_of, thermal
from opto_ckt.analyses.network.primitives import NoiseGenerator, Primitive, Value
from opto_ckt.constants import ELEMENTARY_CHARGE
from opto_ckt.topology import GROUND, LaserDiode, Led, MonitoredLaser, Photodiode


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


@model_of.register
def _(element: Led) -> Parts:
    """Its junction's current, delayed by the lifetime of the carriers, makes the light.

    The shot noise is a voltage in series with the junction's resistance, whose current is then all that recombines: a
    stiff drive keeps noise out of the light.
    """
    ref, light = element.ref, element.light
    junction, inner, noisy, carriers = (f"{ref}.{node}" for node in ("junction", "inner", "noisy", "carriers"))
    inside = (junction, inner)
    resistance, slope = named(f"{ref}.junction_resistance"), named(f"{ref}.slope_efficiency")
    current = named(f"{ref}.current")
    return (
        (
            own("R", element, "series_resistance", (element.anode, junction)),
            Primitive("G", f"{ref}.junction_current", (*inside, *inside), lambda v: 1 / resistance(v)),
            Primitive("E", f"{ref}.shot", (inner, element.cathode, noisy, GROUND), one),
            Primitive("R", f"{ref}.noise_unity", (noisy, GROUND), one),
            own("C", element, "capacitance", (junction, element.cathode)),
            Primitive("G", f"{ref}.injection", (GROUND, carriers, *inside), lambda v: 1 / resistance(v)),
            Primitive("R", f"{ref}.recombination", (carriers, GROUND), one),
            own("C", element, "lifetime", (carriers, GROUND)),
            Primitive("G", f"{ref}.emission", (GROUND, light, carriers, GROUND), slope),
            Primitive("R", f"{ref}.unity", (light, GROUND), one),
        ),
        (
            thermal(f"{ref} series", (element.anode, junction), named(f"{ref}.series_resistance")),
            NoiseGenerator(
                f"{ref} junction shot",
                (noisy, GROUND),
                lambda v: 2 * ELEMENTARY_CHARGE * current(v) * resistance(v) ** 2,
                None,
            ),
        ),
    )


@model_of.register
def _(element: MonitoredLaser) -> Parts:
    """As any laser; current through its junction, not through its capacitance, comes back from the monitor."""
    ref, ends = element.ref, (element.anode, element.cathode)
    monitor = (element.monitor_cathode, element.monitor_anode)
    gain, resistance = named(f"{ref}.monitor_gain"), named(f"{ref}.series_resistance")
    primitives, generators = model_of.dispatch(LaserDiode)(element)
    return (
        (
            *primitives,
            Primitive("G", f"{ref}.monitor", (*monitor, *ends), lambda v: gain(v) / resistance(v)),
            own("C", element, "monitor_capacitance", monitor),
        ),
        (*generators, shot(f"{ref} monitor shot", monitor, named(f"{ref}.monitor_shot"))),
    )
