"""The subcircuit of a junction field-effect transistor: square law from its sheet, noise by itself."""

from __future__ import annotations

from collections.abc import Mapping

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.outputs.spice_noise import shot_noise
from opto_ckt.outputs.spice_text import card, comment, name, number
from opto_ckt.topology import Jfet

COPIES = 1e6  #: side by side, the noise of the J card divided by as many


def jfet_subcircuit(element: Jfet, values: Mapping[str, float]) -> str:
    """Square law, leakage and capacitances of the gate, noise of channel and gate as stated.

    A simulator's own noise of a J card is that of a long channel, in some at a fixed temperature. Many transistors
    side by side whose current is divided again make that of one without its noise.
    """
    ref = element.ref
    kind, gate = ("njf", ("s", "g")) if element.polarity > 0 else ("pjf", ("g", "s"))
    temperature, leak = values["temperature"], values[f"{ref}.control_current"]
    pinch_off = values[f"{ref}.pinch_off_voltage"]
    beta = COPIES * values[f"{ref}.saturation_current"] / pinch_off**2
    channel = values[f"{ref}.channel_noise_factor"] * values[f"{ref}.transconductance"]
    equal_shot = 2 * BOLTZMANN * temperature / ELEMENTARY_CHARGE * channel
    return (
        comment("pins: drain gate source; put the maker's model here")
        + comment(f"j1 is {number(COPIES)} transistors side by side, f1 divides their current again: this leaves")
        + comment("the law of one without its noise, which is stated apart")
        + card(".subckt", name(ref), "d g s")
        + card("ed", "dx 0 d 0", "1")
        + card("es", "sx 0 s 0", "1")
        + card("vj", "dx dy dc", "0")
        + card("j1", "dy g sx", "mj")
        + card("f1", "d s", "vj", number(1 / COPIES))
        + card(".model", "mj", f"{kind}(vto={number(-pinch_off)} beta={number(beta)} is=1e-20)")
        + shot_noise("sc", equal_shot, temperature, "d s")
        + card("cgs", "g s", number(values[f"{ref}.control_source_capacitance"]))
        + card("cgd", "g d", number(values[f"{ref}.control_drain_capacitance"]))
        + card("igl", *gate, "dc", number(leak))
        + shot_noise("sg", leak, temperature, "g s")
        + card(".ends", name(ref))
    )
