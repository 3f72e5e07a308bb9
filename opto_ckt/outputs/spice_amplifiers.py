"""Cards of op amps, comparators, bought transimpedance amplifiers and transistors, at the operating point."""

from __future__ import annotations

from math import log, pi

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.outputs.spice_cards import NOWHERE, Cards, Values, cards, figures_of
from opto_ckt.outputs.spice_jfet import jfet_subcircuit
from opto_ckt.outputs.spice_noise import noise_pair, noise_pair_gain
from opto_ckt.outputs.spice_text import card, comment, name, number
from opto_ckt.topology import BipolarTransistor, ClosedSwitch, Comparator, FixedTia, Jfet, OpAmp, Switch, Transistor


@cards.register
def _(element: Comparator, values: Values, driven: bool) -> Cards:
    """Input capacitances and bias currents; the output at rest: decks of small signals decide nothing."""
    ref, v = name(element.ref), figures_of(element, values)
    bias = values.get(f"{element.ref}.bias_current", 0.0)
    body = (
        comment("pins: in+ in- out v+ v-; put the maker's model here; this one rests and decides nothing")
        + card(".subckt", ref, "p m o vp vn")
        + card("cdf", "p m", number(v["differential_capacitance"]))
        + card("ccp", "p 0", number(v["common_capacitance"]))
        + card("ccm", "m 0", number(v["common_capacitance"]))
        + card("ibp", "p 0 dc", number(bias))
        + card("ibm", "m 0 dc", number(bias))
        + card("gro", "o 0 o 0", number(1 / v["output_resistance"]))
        + card("iq", "vp vn dc", number(values.get(f"{element.ref}.quiescent_current", 0.0)))
        + card("rvp", "vp 0", "1e9")
        + card("rvn", "vn 0", "1e9")
        + card(".ends", ref)
    )
    pins = (name(node) for node in element.nodes.values())
    return Cards(card(f"x{ref}", *pins, ref), body)


@cards.register
def _(element: FixedTia, values: Values, driven: bool) -> Cards:
    """Linear: a sensed current, two poles of a flat response, gain; no limit of input or output."""
    ref, v = name(element.ref), figures_of(element, values)
    pole = 1 / (2 * pi * v["bandwidth"])
    last = "l" if element.passes_dc else "h"
    high_pass = (
        card("ecp", "cp 0 l 0", "1")
        + card("chp", "cp h", number(1 / (2 * pi * v["low_cutoff"])))
        + card("ghp", "h 0 h 0", "1")
    )
    body = (
        comment("pins: in out v+ v-; put the maker's model here")
        + comment("linear: no overload, no rails; check the light against the page")
        + card(".subckt", ref, "i o vp vn")
        + card("vlv", "lv 0 dc", number(values.get("input_level", 0.0)))
        + card("gin", "i lv i lv", number(1 / v["input_resistance"]))
        + noise_pair("i", v["input_noise_density"], 1e-9, values["temperature"])
        + card("gno", "0 i ia ib", number(noise_pair_gain(v["input_noise_density"], values["temperature"])))
        + card("gse", "0 s i lv", number(1 / v["input_resistance"]))
        + card("gsr", "s 0 s 0", "1")
        + card("edr", "d 0 s 0", "1")
        + card("gdm", "d t d t", number(0.5**0.5))
        + card("ltn", "t l", number(pole))
        + card("chd", "l 0", number(pole))
        + ("" if element.passes_dc else high_pass)
        + card("eou", "po 0 0", last, number(v["transimpedance"]))
        + card("gro", "po o po o", number(1 / v["output_resistance"]))
        + card("iq", "vp vn dc", number(values.get(f"{element.ref}.quiescent_current", 0.0)))
        + card("rvp", "vp 0", "1e9")
        + card("rvn", "vn 0", "1e9")
        + card(".ends", ref)
    )
    pins = (name(node) for node in element.nodes.values())
    return Cards(card(f"x{ref}", *pins, ref), body)


@cards.register
def _(element: OpAmp, values: Values, driven: bool) -> Cards:
    """Two poles, output resistance, input capacitance, offset, bias current, noise; linear: no rails, no slew rate."""
    ref, v = name(element.ref), figures_of(element, values)
    second = v["second_pole"]
    offset, bias = values.get(f"{element.ref}.offset", 0.0), values.get(f"{element.ref}.bias_current", 0.0)
    body = (
        comment("pins: in+ in- out v+ v-; put the maker's model here")
        + comment("linear: no rails, no slew rate, no current limit; check the levels against the page")
        + card(".subckt", ref, "p m o vp vn")
        + card("cdf", "p m", number(v["differential_capacitance"]))
        + card("ccp", "p 0", number(v["common_capacitance"]))
        + card("ccm", "m 0", number(v["common_capacitance"]))
        + card("ibp", "p 0 dc", number(bias))
        + card("ibm", "m 0 dc", number(bias))
        + noise_pair("e", v["voltage_noise"], v["voltage_noise_corner"], values["temperature"])
        + noise_pair("i", v["current_noise"], v["current_noise_corner"], values["temperature"])
        + noise_pair("j", v["current_noise"], v["current_noise_corner"], values["temperature"])
        + card("vos", "q p dc", number(offset))
        + card("een", "r q ea eb", number(noise_pair_gain(v["voltage_noise"], values["temperature"])))
        + card("gim", "0 m ia ib", number(noise_pair_gain(v["current_noise"], values["temperature"])))
        + card("gip", "0 p ja jb", number(noise_pair_gain(v["current_noise"], values["temperature"])))
        + card("g1", "0 p1 r m", "1")
        + card("gr1", "p1 0 p1 0", number(1 / v["open_loop_gain"]))
        + card("c1", "p1 0", number(1 / (2 * pi * v["gain_bandwidth"])))
        + card("g2", "0 p2 p1 0", "1")
        + card("gr2", "p2 0 p2 0", "1")
        + (card("c2", "p2 0", number(1 / (2 * pi * second))) if second < NOWHERE else "")
        + card("e1", "po 0 p2 0", "1")
        + card("gro", "po o po o", number(1 / v["output_resistance"]))
        + card("iq", "vp vn dc", number(values.get(f"{element.ref}.quiescent_current", 0.0)))
        + card("rvp", "vp 0", "1e9")
        + card("rvn", "vn 0", "1e9")
        + card(".ends", ref)
    )
    pins = (name(node) for node in element.nodes.values())
    return Cards(card(f"x{ref}", *pins, ref), body)


@cards.register
def _(element: Transistor, values: Values, driven: bool) -> Cards:
    """Square law through the operating point, or a bipolar transistor; the capacitances of the small-signal model."""
    ref, v = name(element.ref), figures_of(element, values)
    body = (
        comment("pins: drain gate source (collector base emitter); put the maker's model here")
        + card(".subckt", ref, "d g s")
        + (_bipolar(element, v, values) if element.bipolar else _mosfet(element, v, values))
        + card("cgs", "g s", number(v["control_source_capacitance"]))
        + card("cgd", "g d", number(v["control_drain_capacitance"]))
        + card(".ends", ref)
    )
    return Cards(card(f"x{ref}", name(element.drain), name(element.control), name(element.source), ref), body)


@cards.register
def _(element: BipolarTransistor, values: Values, driven: bool) -> Cards:
    """Exponential law through the operating point, the resistance of the base before it."""
    ref, v = name(element.ref), figures_of(element, values)
    body = (
        comment("pins: collector base emitter; put the maker's model here")
        + card(".subckt", ref, "d g s")
        + card("rb", "g b", number(v["base_resistance"]))
        + _bipolar(element, v, values, "b")
        + card("cgs", "b s", number(v["control_source_capacitance"]))
        + card("cgd", "b d", number(v["control_drain_capacitance"]))
        + card(".ends", ref)
    )
    return Cards(card(f"x{ref}", name(element.drain), name(element.control), name(element.source), ref), body)


@cards.register
def _(element: Jfet, values: Values, driven: bool) -> Cards:
    ref = name(element.ref)
    call = card(f"x{ref}", name(element.drain), name(element.control), name(element.source), ref)
    return Cards(call, jfet_subcircuit(element, values))


def _mosfet(element: Transistor, v: Values, values: Values) -> str:
    kind = "nmos" if element.polarity > 0 else "pmos"
    beta = values[f"{element.ref}.gain_factor"]
    threshold = element.polarity * values[f"{element.ref}.threshold_voltage"]
    return card("m1", "d g s s", "mq", "w=1e-4 l=1e-4") + card(
        ".model", "mq", f"{kind}(level=1 vto={number(threshold)} kp={number(beta)})"
    )


def _bipolar(element: Transistor, v: Values, values: Values, base: str = "g") -> str:
    kind = "npn" if element.polarity > 0 else "pnp"
    thermal = BOLTZMANN * values["temperature"] / ELEMENTARY_CHARGE
    drop = log(v["drain_current"]) - values[f"{element.ref}.control_voltage"] / thermal
    gain = v["drain_current"] / v["control_current"]
    saturation = number(2.718281828459045**drop)
    return card("q1", "d", base, "s", "mq") + card(".model", "mq", f"{kind}(is={saturation} bf={number(gain)})")


@cards.register
def _(element: Switch, values: Values, driven: bool) -> Cards:
    kind, threshold = ("nmos", "1.5") if element.polarity > 0 else ("pmos", "-1.5")
    ref, model = name(element.ref), name(f"m{element.ref}")
    nodes = (name(element.drain), name(element.control), name(element.source), name(element.source))
    return Cards(
        card(f"m{ref}", *nodes, model, "w=1e-4 l=1e-4")
        + card(".model", model, f"{kind}(level=1 vto={threshold} kp=0.1)")
    )


@cards.register
def _(element: ClosedSwitch, values: Values, driven: bool) -> Cards:
    """On for good: a drop and a resistance at its output, a level and a capacitance at its control."""
    ref, v = name(element.ref), figures_of(element, values)
    body = (
        comment("pins: drain gate source (collector base emitter); put the maker's model here")
        + comment("this one is on for good: it holds at the current of this deck")
        + card(".subckt", ref, "d g s")
        + card("vsat", "d x dc", number(values[f"{element.ref}.drop"]))
        + card("ron", "x s", number(v["on_resistance"]))
        + card("vc", "g y dc", number(values[f"{element.ref}.control_level"]))
        + card("gc", "y s y s", number(v["control_conductance"]))
        + card("cc", "g s", number(v["control_capacitance"]))
        + card(".ends", ref)
    )
    return Cards(card(f"x{ref}", name(element.drain), name(element.control), name(element.source), ref), body)
