"""Small-signal models of a switch that is fully on, and of the instant of a pulse that is held."""

from __future__ import annotations

from opto_ckt.analyses.network.element_model import Parts, model_of, named, own, thermal
from opto_ckt.analyses.network.primitives import Primitive
from opto_ckt.topology import HeldCurrent, PulseSwitch


@model_of.register
def _(element: PulseSwitch) -> Parts:
    """Its resistance, and the three capacitances of its sheet taken apart; they are at least what the third leaves."""
    ref, ends = element.ref, (element.drain, element.source)
    inlet, across, reverse = (named(f"{ref}.{name}_capacitance") for name in ("input", "output", "reverse"))
    return (
        (
            own("R", element, "resistance", ends),
            Primitive("C", f"{ref}.gate_source", (element.control, element.source), lambda v: inlet(v) - reverse(v)),
            Primitive("C", f"{ref}.gate_drain", (element.control, element.drain), reverse),
            Primitive("C", f"{ref}.drain_source", ends, across),
        ),
        (thermal(f"{ref} channel", ends, named(element.value_name("resistance"))),),
    )


@model_of.register
def _(element: HeldCurrent) -> Parts:
    """Nothing: a current that does not change."""
    return (), ()
