"""Small-signal models of resistors, capacitors, coils, contacts, rails and references."""

from __future__ import annotations

from opto_ckt.analyses.network.element_model import Parts, model_of, named, own, signal_of, thermal
from opto_ckt.analyses.network.primitives import NoiseGenerator, Primitive, Value
from opto_ckt.topology import (
    GROUND,
    AnalogSwitch,
    Capacitor,
    ClosedSwitch,
    Diode,
    Element,
    Inductor,
    LogicOutput,
    Reference,
    Resistor,
    Supply,
    Switch,
    Terminal,
    Trimmer,
)


@model_of.register
def _(element: Resistor) -> Parts:
    return (
        (Primitive("R", element.ref, (element.a, element.b), named(element.ref)),),
        (thermal(element.ref, (element.a, element.b), named(element.ref)),),
    )


@signal_of.register
def _(element: Resistor) -> tuple[tuple[str, str], Value]:
    """A voltage in series with the resistor, raising its second end."""
    resistance = named(element.ref)
    return (element.a, element.b), lambda v: 1 / resistance(v)


@model_of.register
def _(element: Capacitor) -> Parts:
    return (Primitive("C", element.ref, (element.a, element.b), named(element.ref)),), ()


@model_of.register
def _(element: Inductor) -> Parts:
    """Inductance in series with the resistance of its winding."""
    winding = f"{element.ref}.winding"
    resistance = element.value_name("resistance")
    return (
        (
            Primitive("L", element.ref, (element.a, winding), named(element.ref)),
            own("R", element, "resistance", (winding, element.b)),
        ),
        (thermal(f"{element.ref} winding", (winding, element.b), named(resistance)),),
    )


@model_of.register
def _(element: Diode) -> Parts:
    return (own("C", element, "capacitance", (element.anode, element.cathode)),), ()


@model_of.register
def _(element: AnalogSwitch) -> Parts:
    """Resistance and capacitance of the contact in its position; each end's capacitance to ground."""
    ends, ground = (element.a, element.b), named(f"{element.ref}.terminal_capacitance")
    resistance = named(element.value_name("resistance"))
    return (
        (
            own("R", element, "resistance", ends),
            own("C", element, "capacitance", ends),
            Primitive("C", f"{element.ref}.ground_a", (element.a, GROUND), ground),
            Primitive("C", f"{element.ref}.ground_b", (element.b, GROUND), ground),
        ),
        (thermal(f"{element.ref} contact", ends, resistance),),
    )


@model_of.register(Supply)
@model_of.register(Terminal)
@model_of.register(Switch)
def _(element: Element) -> Parts:
    """Nothing: a rail is ground, a terminal a name, and a switch that is off conducts nothing."""
    return (), ()


@model_of.register
def _(element: Reference) -> Parts:
    ref, ends = element.ref, (element.cathode, element.anode)
    noise, resistance = named(f"{ref}.noise"), named(f"{ref}.output_resistance")
    return (
        (own("R", element, "output_resistance", ends),),
        (NoiseGenerator(f"{ref} noise", ends, lambda v: (noise(v) / resistance(v)) ** 2, None),),
    )


@signal_of.register
def _(element: Reference) -> tuple[tuple[str, str], Value]:
    resistance = named(f"{element.ref}.output_resistance")
    return (element.anode, element.cathode), lambda v: 1 / resistance(v)


@model_of.register
def _(element: LogicOutput) -> Parts:
    """The resistance of the transistor that conducts; what noise it makes no sheet says."""
    resistance, ends = named(element.value_name("resistance")), (element.out, GROUND)
    return (Primitive("G", f"{element.ref}.output", (*ends, *ends), lambda v: 1 / resistance(v)),), ()


@model_of.register
def _(element: Trimmer) -> Parts:
    ends = (element.a, element.b)
    return (
        (own("R", element, "setting", ends),),
        (thermal(element.ref, ends, named(element.value_name("setting"))),),
    )


@model_of.register
def _(element: ClosedSwitch) -> Parts:
    """Resistance of the channel, or of the saturated collector; the control holds its level."""
    ends, control = (element.drain, element.source), (element.control, element.source)
    conductance = named(element.value_name("control_conductance"))
    return (
        (
            own("R", element, "on_resistance", ends),
            own("C", element, "control_capacitance", control),
            Primitive("G", element.value_name("control_conductance"), (*control, *control), conductance),
        ),
        (thermal(f"{element.ref} on", ends, named(element.value_name("on_resistance"))),),
    )
