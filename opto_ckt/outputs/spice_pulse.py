"""Cards of a switch that starts a pulse, and of the instant of it that is held."""

from __future__ import annotations

from opto_ckt.outputs.spice_cards import Cards, Values, cards, figures_of
from opto_ckt.outputs.spice_text import card, comment, name, number
from opto_ckt.topology import HeldCurrent, PulseSwitch

CHANNEL = 0.002  #: share of the on-resistance that depends on the gate: little, so that the rest is linear
LEAK = 1e9  #: of the switch while it is off; keeps the drain from floating [Ω]


@cards.register
def _(element: PulseSwitch, values: Values, driven: bool) -> Cards:
    """A channel that opens above the threshold, in series with the on-resistance."""
    ref, v = name(element.ref), figures_of(element, values)
    overdrive = values[f"{element.ref}.overdrive"]
    transconductance = 1 / (CHANNEL * v["resistance"] * overdrive)
    model = f"nmos(level=1 vto={number(values[f'{element.ref}.threshold_voltage'])} kp={number(transconductance)})"
    body = (
        comment("pins: drain gate source; put the maker's model here")
        + comment("above its threshold the switch is as fast as its capacitances let it be")
        + card(".subckt", ref, "d g s")
        + card("ron", "d d1", number((1 - CHANNEL) * v["resistance"]))
        + card("m1", "d1 g s s", "mq", "w=1e-4 l=1e-4")
        + card(".model", "mq", model)
        + card("roff", "d s", number(LEAK))
        + card("cgs", "g s", number(v["input_capacitance"] - v["reverse_capacitance"]))
        + card("cgd", "g d", number(v["reverse_capacitance"]))
        + card("cds", "d s", number(v["output_capacitance"]))
        + card(".ends", ref)
    )
    return Cards(card(f"x{ref}", name(element.drain), name(element.control), name(element.source), ref), body)


@cards.register
def _(element: HeldCurrent, values: Values, driven: bool) -> Cards:
    """Nothing where it is none: in the deck of the pulse the capacitor gives it itself."""
    held = values[element.ref]
    said = comment("the instant of the peak is held: this is what the capacitor gives then")
    return Cards(said + card(name(element.ref), name(element.a), name(element.b), "dc", number(held)) if held else "")
