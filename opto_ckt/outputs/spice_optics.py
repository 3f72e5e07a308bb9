"""Cards of photodiodes, lasers and LEDs, light in watts as volts."""

from __future__ import annotations

from math import expm1, pi

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.outputs.spice_cards import NOWHERE, Cards, Values, cards, figures_of
from opto_ckt.outputs.spice_noise import shot_noise
from opto_ckt.outputs.spice_text import card, comment, name, number
from opto_ckt.topology import LaserDiode, Led, MonitoredLaser, Photodiode


@cards.register
def _(element: Photodiode, values: Values, driven: bool) -> Cards:
    """Light in watts as volts on node pw; linear capacitance at the bias; standing currents with their shot noise."""
    ref, v = name(element.ref), figures_of(element, values)
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
def _(element: LaserDiode, values: Values, driven: bool) -> Cards:
    """Turn-on voltage and series resistance, a junction that blocks; light in watts as volts on the last pin."""
    ref, light = name(element.ref), name(f"pw{element.ref}")
    body = _laser_body(element, values, "anode cathode light", "a k pw", "")
    call = card(f"x{ref}", name(element.anode), name(element.cathode), light, ref)
    return Cards(call + card(f"r{light[:7]}", light, "0", "1e6"), body)


@cards.register
def _(element: MonitoredLaser, values: Values, driven: bool) -> Cards:
    """As any laser; its monitor passes a share of what exceeds the threshold, with dark current and shot noise."""
    ref, light, v = name(element.ref), name(f"pw{element.ref}"), figures_of(element, values)
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
    ref, v = name(element.ref), figures_of(element, values)
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
def _(element: Led, values: Values, driven: bool) -> Cards:
    """Diode law through the operating point; its current, delayed by the lifetime, makes the light."""
    ref, v = name(element.ref), figures_of(element, values)
    thermal = BOLTZMANN * values["temperature"] / ELEMENTARY_CHARGE
    emission = v["junction_resistance"] * v["current"] / thermal
    drop = values[f"{element.ref}.forward_voltage"] - v["current"] * v["series_resistance"]
    saturation = v["current"] / expm1(drop / (emission * thermal))
    dark = values[f"{element.ref}.emitted_power"] - v["slope_efficiency"] * v["current"]
    light = name(element.light)
    body = (
        comment("pins: anode cathode light; put the maker's model here, light in watts as volts")
        + comment("forward voltage and light hold at the operating current and temperature of this deck")
        + card(".subckt", ref, "a k pw")
        + card("rs", "a j", number(v["series_resistance"]))
        + card("vs", "j j1 dc", "0")
        + card("dj", "j1 k", "dj")
        + card(".model dj", f"d(is={number(saturation)} n={number(emission)})")
        + card("cj", "j k", number(v["capacitance"]))
        + comment("the junction's current, delayed by the lifetime")
        + card("f1", "0 x vs", "1")
        + card("grx", "x 0 x 0", "1")
        + card("ctau", "x 0", number(v["lifetime"]))
        + comment("straight line through the light at the operating current")
        + card("e1", "p1 0 x 0", number(v["slope_efficiency"]))
        + card("vp", "pw p1 dc", number(dark))
        + card(".ends", ref)
    )
    load = card(f"r{light[:7]}", light, "0", "1e6")
    return Cards(card(f"x{ref}", name(element.anode), name(element.cathode), light, ref) + load, body)
