"""Cards of resistors, capacitors, coils, contacts, rails, diodes and references."""

from __future__ import annotations

from opto_ckt.formulas.noise_generator import resistance_for_voltage_noise
from opto_ckt.outputs.spice_cards import Cards, Values, cards, figures_of
from opto_ckt.outputs.spice_noise import LEAST
from opto_ckt.outputs.spice_text import card, comment, name, number
from opto_ckt.topology import (
    AnalogSwitch,
    Capacitor,
    Diode,
    Inductor,
    LogicOutput,
    Reference,
    Resistor,
    Supply,
    Terminal,
    Trimmer,
)


@cards.register(Terminal)
def _(element: Terminal, values: Values, driven: bool) -> Cards:
    return Cards("")


@cards.register
def _(element: Resistor, values: Values, driven: bool) -> Cards:
    a, b, ref = name(element.a), name(element.b), name(element.ref)
    if not driven:
        return Cards(card(ref, a, b, number(values[element.ref])))
    return Cards(card("vsig", "sig", a, "dc 0 ac 1 @pulse@") + card(ref, "sig", b, number(values[element.ref])))


@cards.register
def _(element: Capacitor, values: Values, driven: bool) -> Cards:
    value = values[element.ref]
    return Cards(card(name(element.ref), name(element.a), name(element.b), number(value)) if value > 0 else "")


@cards.register
def _(element: Inductor, values: Values, driven: bool) -> Cards:
    ref, inner = name(element.ref), name(f"w{element.ref}")
    return Cards(
        card(ref, name(element.a), inner, number(values[element.ref]))
        + card(f"r{ref}", inner, name(element.b), number(values[f"{element.ref}.resistance"]))
    )


@cards.register
def _(element: AnalogSwitch, values: Values, driven: bool) -> Cards:
    """The contact in its position: resistance, capacitances, leakage."""
    ref, v = name(element.ref), figures_of(element, values)
    body = (
        comment("pins: the two ends of the contact; put the maker's model here")
        + card(".subckt", ref, "a b")
        + card("ron", "a b", number(v["resistance"]))
        + card("coff", "a b", number(v["capacitance"]))
        + card("ca", "a 0", number(v["terminal_capacitance"]))
        + card("cb", "b 0", number(v["terminal_capacitance"]))
        + card("ileak", "a 0 dc", number(v["leak"]))
        + card(".ends", ref)
    )
    return Cards(card(f"x{ref}", name(element.a), name(element.b), ref), body)


@cards.register
def _(element: Supply, values: Values, driven: bool) -> Cards:
    return Cards(card(name(element.ref), name(element.node), "0", "dc", number(values[element.value])))


@cards.register
def _(element: Diode, values: Values, driven: bool) -> Cards:
    ref, anode, cathode = name(element.ref), name(element.anode), name(element.cathode)
    return Cards(
        card(ref, anode, cathode, f"m{ref}")
        + card(f"c{ref}", anode, cathode, number(values[f"{element.ref}.capacitance"]))
        + card(".model", f"m{ref}", "d(is=1e-12 n=1)")
    )


@cards.register
def _(element: Reference, values: Values, driven: bool) -> Cards:
    ref, v = name(element.ref), figures_of(element, values)
    generator = "0"
    noise = ""
    if v["noise"] > LEAST:
        resistance = resistance_for_voltage_noise(voltage_noise=v["noise"], temperature=values["temperature"])
        noise = card("rn", "n 0", number(float(resistance))) + card("en", "e1 a n 0", "1")
        generator = "e1"
    body = (
        comment("pins: cathode anode; put the maker's model here")
        + card(".subckt", ref, "k a")
        + noise
        + card("vr", "e2", "a" if generator == "0" else generator, "dc", number(values[f"{element.ref}.voltage"]))
        + card("gr", "k e2 k e2", number(1 / v["output_resistance"]))
        + card(".ends", ref)
    )
    return Cards(card(f"x{ref}", name(element.cathode), name(element.anode), ref), body)


@cards.register
def _(element: LogicOutput, values: Values, driven: bool) -> Cards:
    ref, v = name(element.ref), figures_of(element, values)
    body = (
        comment("pins: out; the output at rest in one state; put the maker's model here")
        + card(".subckt", ref, "o")
        + card("ve", "e 0 dc", number(values[f"{element.ref}.level"]) + (" @pulse@" if driven else ""))
        + card("gro", "e o e o", number(1 / v["resistance"]))
        + card(".ends", ref)
    )
    return Cards(card(f"x{ref}", name(element.out), ref), body)


@cards.register
def _(element: Trimmer, values: Values, driven: bool) -> Cards:
    return Cards(card(name(element.ref), name(element.a), name(element.b), number(values[f"{element.ref}.setting"])))
