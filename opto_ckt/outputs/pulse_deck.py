"""The deck of a pulse: everything at rest, charged, until the logic output that triggers it rises."""

from __future__ import annotations

from collections.abc import Mapping

from opto_ckt.outputs.spice_models import cards
from opto_ckt.outputs.spice_text import card, comment, deck, fitting, number
from opto_ckt.result import Result, Scene
from opto_ckt.topology import Resistor, Topology

READ_OUT = "pulse"  #: node whose volts are the amperes through the resistor that the signal enters through
CHANGED = "pulse."  #: values named so are those of this deck, in place of the ones without it
POINTS = 300  #: time steps in the width of a pulse
LONGEST_EDGE = 1e-3  #: of the trigger, as a share of the width


def pulse_deck(result: Result, scene: Scene, lines: list[str], temperature: str) -> str:
    """One pulse from rest: the logic output rises after a width and stays; the run ends some widths later."""
    topology = result.topology
    values = {**scene.values, **_changed(scene.values)}
    called = [cards(element, values, element.ref == topology.trigger) for element in topology]
    text = "".join(each.subcircuit for each in called) + "".join(each.calls for each in called)
    start, end, longest = pulse_times(scene)
    trigger, edge = topology.trigger, LONGEST_EDGE * scene.expected["pulse_width"]
    levels = f"{number(values[f'{trigger}.low'])} {number(values[f'{trigger}.level'])}"
    wave = f"pulse({levels} {' '.join(map(number, (start, edge, edge, 10 * end, 20 * end)))})"
    analysis = card(".tran", number(longest), number(end), "0", number(longest))
    return deck([*lines, fitting(text.replace("@pulse@", wave)), _read_out(topology, values), temperature, analysis])


def pulse_times(scene: Scene) -> tuple[float, float, float]:
    """When the trigger rises, when the run ends, and the largest time step. [s]"""
    width, delay = scene.expected["pulse_width"], scene.expected.get("turn_on_time", 0.0)
    return width, 7 * width + 3 * delay, width / POINTS


def _changed(values: Mapping[str, float]) -> dict[str, float]:
    return {name.removeprefix(CHANGED): value for name, value in values.items() if name.startswith(CHANGED)}


def _read_out(topology: Topology, values: Mapping[str, float]) -> str:
    measured = topology[topology.input]
    if not isinstance(measured, Resistor):
        raise TypeError(f"the current of a pulse is read off a resistor, not off {measured.ref}")
    gain = number(1 / values[measured.ref])
    return (
        comment(f"read-out: v({READ_OUT}) is the current through {measured.ref}, a volt an ampere")
        + card("epulse", READ_OUT, "0", measured.a, measured.b, gain)
        + card("rpulse", READ_OUT, "0", "1e6")
    )
