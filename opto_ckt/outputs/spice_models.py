"""Cards and subcircuits of each kind of element, at the operating point of one scene.

Inner conductances that have no physical resistor behind them are voltage-controlled current sources on their own nodes:
they make no noise, as in the engine.
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import singledispatch
from math import log, pi
from typing import NamedTuple

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.noise_generator import resistance_for_voltage_noise
from opto_ckt.outputs.spice_jfet import jfet_subcircuit
from opto_ckt.outputs.spice_noise import LEAST, noise_pair, noise_pair_gain, shot_noise
from opto_ckt.outputs.spice_text import card, comment, name, number
from opto_ckt.topology import (
    AnalogSwitch,
    BipolarTransistor,
    Capacitor,
    Comparator,
    Diode,
    Element,
    FixedTia,
    Inductor,
    Jfet,
    LaserDiode,
    MonitoredLaser,
    OpAmp,
    Photodiode,
    Reference,
    Resistor,
    Supply,
    Switch,
    Terminal,
    Transistor,
    Trimmer,
)

NOWHERE = 1e14  #: frequencies from here on stand for a pole that the sheet does not give [Hz]

Values = Mapping[str, float]


class Cards(NamedTuple):
    """What an element puts into the circuit, and the subcircuit that it calls."""

    calls: str
    subcircuit: str = ""


@singledispatch
def cards(element: Element, values: Values, driven: bool) -> Cards:
    """Cards of an element; ``driven`` where the circuit's input enters through it."""
    raise TypeError(f"no SPICE model for {type(element).__name__}")


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
def _(element: Trimmer, values: Values, driven: bool) -> Cards:
    return Cards(card(name(element.ref), name(element.a), name(element.b), number(values[f"{element.ref}.setting"])))


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
    ref, v = name(element.ref), _figures(element, values)
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
def _(element: Photodiode, values: Values, driven: bool) -> Cards:
    """Light in watts as volts on node pw; linear capacitance at the bias; standing currents with their shot noise."""
    ref, v = name(element.ref), _figures(element, values)
    bias = values.get(f"{element.ref}.reverse_bias", values["detector.reverse_bias"])
    total = v["signal_shot"] + v["ambient_shot"] + v["dark_shot"]
    transit = v["transit_frequency"]
    body = (
        comment("pins: anode cathode light; put the maker's model here, light in watts as volts")
        + card(".subckt", ref, "a k pw")
        + card("gin", "0 pl pw 0", "1")
        + card("gpl", "pl 0 pl 0", "1")
        + (card("cpl", "pl 0", number(1 / (2 * pi * transit))) if transit < NOWHERE else "")
        + card("gph", "k j pl 0", number(v["responsivity"]))
        + card("cj", "k j", number(v["capacitance"]))
        + card("rsh", "k j", number(v["shunt_resistance"]))
        + card("rs", "j a", number(v["series_resistance"]))
        + comment("dark and ambient current, less what the shunt carries at the bias")
        + card("idk", "k j dc", number(v["dark_current"] + v["ambient_current"] - bias / v["shunt_resistance"]))
        + comment("clamp where light takes the bias away")
        + card("dcl", "j k", "dcl")
        + card(".model dcl", "d(is=1e-18 n=1)")
        + shot_noise("st", total, values["temperature"], "k j")
        + card(".ends", ref)
    )
    light = "pw" if driven else f"p{ref}"
    steady = card(f"v{light}", f"{light} 0 dc", number(values.get(f"{element.ref}.power", 0.0)))
    source = card("vpw", "pw 0 dc", number(values["signal.power"]), "ac 1 @pulse@") if driven else steady
    return Cards(source + card(f"x{ref}", name(element.anode), name(element.cathode), light, ref), body)


@cards.register
def _(element: Comparator, values: Values, driven: bool) -> Cards:
    """Input capacitances and bias currents; the output at rest: decks of small signals decide nothing."""
    ref, v = name(element.ref), _figures(element, values)
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
    ref, v = name(element.ref), _figures(element, values)
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
    ref, v = name(element.ref), _figures(element, values)
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
    ref, v = name(element.ref), _figures(element, values)
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
    ref, v = name(element.ref), _figures(element, values)
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
def _(element: LaserDiode, values: Values, driven: bool) -> Cards:
    """Turn-on voltage and series resistance, a junction that blocks; light in watts as volts on the last pin."""
    ref, light = name(element.ref), name(f"pw{element.ref}")
    body = _laser_body(element, values, "anode cathode light", "a k pw", "")
    call = card(f"x{ref}", name(element.anode), name(element.cathode), light, ref)
    return Cards(call + card(f"r{light[:7]}", light, "0", "1e6"), body)


@cards.register
def _(element: MonitoredLaser, values: Values, driven: bool) -> Cards:
    """As any laser; its monitor passes a share of what exceeds the threshold, with dark current and shot noise."""
    ref, light, v = name(element.ref), name(f"pw{element.ref}"), _figures(element, values)
    monitor = (
        card("fmo", "mk ma", "vp", number(v["monitor_gain"]))
        + card("imd", "mk ma dc", number(values[f"{element.ref}.monitor_dark"]))
        + card("cmo", "mk ma", number(v["monitor_capacitance"]))
        + shot_noise("sm", v["monitor_shot"], values["temperature"], "mk ma")
    )
    pins = "anode cathode, monitor's cathode anode, light"
    body = _laser_body(element, values, pins, "a k mk ma pw", monitor)
    call = card(f"x{ref}", *(name(node) for node in element.nodes.values()), light, ref)
    return Cards(call + card(f"r{light[:7]}", light, "0", "1e6"), body)


def _laser_body(element: LaserDiode, values: Values, said: str, pins: str, more: str) -> str:
    """Turn-on voltage, series resistance, blocking junction, light; then ``more`` cards."""
    ref, v = name(element.ref), _figures(element, values)
    current = max(values[f"{element.ref}.current"], 1e-9)
    thermal = BOLTZMANN * values["temperature"] / ELEMENTARY_CHARGE
    emission = min(1.0, 0.2 * v["series_resistance"] * current / thermal)
    drop = 10 * emission * thermal
    saturation = current / (2.718281828459045**10 - 1)
    resistance = v["series_resistance"] - emission * thermal / current
    turn_on = values[f"{element.ref}.turn_on_voltage"] + v["series_resistance"] * current - drop - resistance * current
    return (
        comment(f"pins: {said}; put the maker's model here, light in watts as volts")
        + comment("forward voltage and slope hold at the operating current and temperature of this deck")
        + card(".subckt", ref, pins)
        + card("vs", "a a1 dc", "0")
        + card("vto", "a1 a2 dc", number(turn_on))
        + card("grs", "a2 a3 a2 a3", number(1 / resistance))
        + card("dj", "a3 k", "dj")
        + card(".model dj", f"d(is={number(saturation)} n={number(emission)})")
        + card("cj", "a k", number(v["capacitance"]))
        + comment("excess over threshold goes through vp, shortage through dn")
        + card("f1", "0 x vs", "1")
        + card("ith", "x 0 dc", number(values[f"{element.ref}.threshold_current"]))
        + card("dp", "x y", "dsp")
        + card("vp", "y 0 dc", "0")
        + card("dn", "0 x", "dsp")
        + card(".model dsp", "d(is=1e-14 n=1)")
        + card("h1", "pw 0 vp", number(values[f"{element.ref}.slope_efficiency"]))
        + more
        + card(".ends", ref)
    )


@cards.register
def _(element: Reference, values: Values, driven: bool) -> Cards:
    ref, v = name(element.ref), _figures(element, values)
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


def _figures(element: Element, values: Values) -> dict[str, float]:
    return {figure: values[element.value_name(figure)] for figure in element.figures}
