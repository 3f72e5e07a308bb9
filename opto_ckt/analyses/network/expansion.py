"""Elements to primitives: the one small-signal model that the engine, the symbolic road and the decks share."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from functools import singledispatch
from math import pi
from typing import Any

from opto_ckt.analyses.network.primitives import Expansion, Kind, NoiseGenerator, Primitive, Value
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.topology import (
    GROUND,
    AnalogSwitch,
    BipolarTransistor,
    Capacitor,
    Comparator,
    Diode,
    Element,
    FixedTia,
    Inductor,
    LaserDiode,
    MonitoredLaser,
    OpAmp,
    Photodiode,
    Reference,
    Resistor,
    Supply,
    Switch,
    Terminal,
    Topology,
    Transistor,
    Trimmer,
    renamed,
)

Parts = tuple[tuple[Primitive, ...], tuple[NoiseGenerator, ...]]


def expand(topology: Topology) -> Expansion:
    """The small-signal primitives and noise generators; rails are ground, what lies between them is left out."""
    rails = {element.node for element in topology if isinstance(element, Supply)}
    primitives: list[Primitive] = []
    generators: list[NoiseGenerator] = []
    for element in topology:
        grounded = renamed(element, dict.fromkeys(rails, GROUND))
        more_primitives, more_generators = _expand(grounded)
        primitives += [each for each in more_primitives if each.nodes[0] != each.nodes[1]]
        generators += [each for each in more_generators if each.nodes[0] != each.nodes[1]]
    nodes, gain = _signal(topology[topology.input])
    return Expansion(
        primitives=tuple(primitives),
        generators=tuple(generators),
        input=nodes,
        gain=gain,
        output=topology.output,
        loop=_opened(topology[topology.loop]) if topology.loop else None,
        rival=_signal(topology[topology.rival]) if topology.rival else None,
    )


@singledispatch
def _expand(element: Element) -> Parts:
    raise TypeError(f"no small-signal model for {type(element).__name__}")


def _opened(element: Element) -> str:
    """Primitive at which a loop is opened: an op amp's first stage, a transistor's channel, a laser's monitor."""
    if isinstance(element, MonitoredLaser):
        return f"{element.ref}.monitor"
    return f"{element.ref}.{'channel' if isinstance(element, Transistor) else 'stage1'}"


@singledispatch
def _signal(element: Element) -> tuple[tuple[str, str], Value]:
    """Nodes and gain of the current that a unit of the circuit's input injects."""
    raise TypeError(f"{type(element).__name__} is no input")


@_expand.register
def _(element: Resistor) -> Parts:
    return (
        (Primitive("R", element.ref, (element.a, element.b), _named(element.ref)),),
        (_thermal(element.ref, (element.a, element.b), _named(element.ref)),),
    )


@_signal.register
def _(element: Resistor) -> tuple[tuple[str, str], Value]:
    """A voltage in series with the resistor, raising its second end."""
    resistance = _named(element.ref)
    return (element.a, element.b), lambda v: 1 / resistance(v)


@_expand.register
def _(element: Trimmer) -> Parts:
    ends = (element.a, element.b)
    return (
        (_own("R", element, "setting", ends),),
        (_thermal(element.ref, ends, _named(element.value_name("setting"))),),
    )


@_expand.register
def _(element: Capacitor) -> Parts:
    return (Primitive("C", element.ref, (element.a, element.b), _named(element.ref)),), ()


@_expand.register
def _(element: Inductor) -> Parts:
    """Inductance in series with the resistance of its winding."""
    winding = f"{element.ref}.winding"
    resistance = element.value_name("resistance")
    return (
        (
            Primitive("L", element.ref, (element.a, winding), _named(element.ref)),
            _own("R", element, "resistance", (winding, element.b)),
        ),
        (_thermal(f"{element.ref} winding", (winding, element.b), _named(resistance)),),
    )


@_expand.register
def _(element: Diode) -> Parts:
    return (_own("C", element, "capacitance", (element.anode, element.cathode)),), ()


@_expand.register
def _(element: AnalogSwitch) -> Parts:
    """Resistance and capacitance of the contact in its position; each end's capacitance to ground."""
    ends, ground = (element.a, element.b), _named(f"{element.ref}.terminal_capacitance")
    resistance = _named(element.value_name("resistance"))
    return (
        (
            _own("R", element, "resistance", ends),
            _own("C", element, "capacitance", ends),
            Primitive("C", f"{element.ref}.ground_a", (element.a, GROUND), ground),
            Primitive("C", f"{element.ref}.ground_b", (element.b, GROUND), ground),
        ),
        (_thermal(f"{element.ref} contact", ends, resistance),),
    )


@_expand.register(Supply)
@_expand.register(Terminal)
@_expand.register(Switch)
def _(element: Element) -> Parts:
    """Nothing: a rail is ground, a terminal a name, and a switch that is off conducts nothing."""
    return (), ()


@_expand.register
def _(element: Photodiode) -> Parts:
    """Junction (C, shunt) behind its series resistance; light enters through the pole of the transit time."""
    ref, junction, light = element.ref, f"{element.ref}.junction", f"{element.ref}.light"
    inside = (element.cathode, junction)
    transit = _named(f"{ref}.transit_frequency")
    responsivity = _named(f"{ref}.responsivity")
    return (
        (
            Primitive("R", f"{ref}.transit_r", (light, GROUND), _one),
            Primitive("C", f"{ref}.transit_c", (light, GROUND), lambda v: 1 / (2 * pi * transit(v))),
            Primitive("G", f"{ref}.photocurrent", (*inside, light, GROUND), responsivity),
            _own("C", element, "capacitance", inside),
            _own("R", element, "shunt_resistance", inside),
            _own("R", element, "series_resistance", (junction, element.anode)),
        ),
        (
            _shot(f"{ref} signal shot", inside, _named(f"{ref}.signal_shot")),
            _shot(f"{ref} ambient shot", inside, _named(f"{ref}.ambient_shot")),
            _shot(f"{ref} dark shot", inside, _named(f"{ref}.dark_shot")),
            _thermal(f"{ref} shunt", inside, _named(f"{ref}.shunt_resistance")),
            _thermal(f"{ref} series", (junction, element.anode), _named(f"{ref}.series_resistance")),
        ),
    )


@_signal.register
def _(element: Photodiode) -> tuple[tuple[str, str], Value]:
    return (GROUND, f"{element.ref}.light"), _one


@_expand.register
def _(element: OpAmp) -> Parts:
    """Two poles of unit-gain stages, an output resistance, input capacitances; e_n sits ahead of the first stage."""
    ref = element.ref
    first, second, ideal = f"{ref}.pole1", f"{ref}.pole2", f"{ref}.ideal"
    gain_bandwidth = _named(f"{ref}.gain_bandwidth")
    open_loop_gain = _named(f"{ref}.open_loop_gain")
    second_pole = _named(f"{ref}.second_pole")
    voltage_noise = _named(f"{ref}.voltage_noise")
    current_noise = _named(f"{ref}.current_noise")
    return (
        (
            _own("C", element, "differential_capacitance", (element.plus, element.minus)),
            Primitive("C", f"{ref}.common_plus", (element.plus, GROUND), _named(f"{ref}.common_capacitance")),
            Primitive("C", f"{ref}.common_minus", (element.minus, GROUND), _named(f"{ref}.common_capacitance")),
            Primitive("G", f"{ref}.stage1", (GROUND, first, element.plus, element.minus), _one),
            Primitive("R", f"{ref}.gain", (first, GROUND), open_loop_gain),
            Primitive("C", f"{ref}.dominant", (first, GROUND), lambda v: 1 / (2 * pi * gain_bandwidth(v))),
            Primitive("G", f"{ref}.stage2", (GROUND, second, first, GROUND), _one),
            Primitive("R", f"{ref}.unity", (second, GROUND), _one),
            Primitive("C", f"{ref}.second", (second, GROUND), lambda v: 1 / (2 * pi * second_pole(v))),
            Primitive("E", f"{ref}.buffer", (ideal, GROUND, second, GROUND), _one),
            Primitive("R", f"{ref}.output", (ideal, element.out), _named(f"{ref}.output_resistance")),
        ),
        (
            NoiseGenerator(
                f"{ref} voltage",
                (GROUND, first),
                lambda v: voltage_noise(v) ** 2,
                _named(f"{ref}.voltage_noise_corner"),
            ),
            NoiseGenerator(
                f"{ref} current",
                (GROUND, element.minus),
                lambda v: current_noise(v) ** 2,
                _named(f"{ref}.current_noise_corner"),
            ),
            NoiseGenerator(
                f"{ref} current, + input",
                (GROUND, element.plus),
                lambda v: current_noise(v) ** 2,
                _named(f"{ref}.current_noise_corner"),
            ),
        ),
    )


@_expand.register
def _(element: Comparator) -> Parts:
    """Input capacitances; the output rests at a level, behind its resistance."""
    ref = element.ref
    common = _named(f"{ref}.common_capacitance")
    return (
        (
            _own("C", element, "differential_capacitance", (element.plus, element.minus)),
            Primitive("C", f"{ref}.common_plus", (element.plus, GROUND), common),
            Primitive("C", f"{ref}.common_minus", (element.minus, GROUND), common),
            _own("R", element, "output_resistance", (element.out, GROUND)),
        ),
        (),
    )


@_expand.register
def _(element: FixedTia) -> Parts:
    """A sensed current, two poles with Q = 1/√2, where it does not pass DC a high-pass, gain, output resistance."""
    ref = element.ref
    sensed, driven, turned, low = (f"{ref}.{name}" for name in ("sensed", "driven", "turned", "low"))
    last, ideal = low if element.passes_dc else f"{ref}.high", f"{ref}.ideal"
    resistance, bandwidth = _named(f"{ref}.input_resistance"), _named(f"{ref}.bandwidth")
    transimpedance, noise = _named(f"{ref}.transimpedance"), _named(f"{ref}.input_noise_density")
    primitives = [
        _own("R", element, "input_resistance", (element.input, GROUND)),
        Primitive("G", f"{ref}.sense", (GROUND, sensed, element.input, GROUND), lambda v: 1 / resistance(v)),
        Primitive("R", f"{ref}.unity", (sensed, GROUND), _one),
        Primitive("E", f"{ref}.drive", (driven, GROUND, sensed, GROUND), _one),
        Primitive("R", f"{ref}.damping", (driven, turned), lambda v: 2**0.5),
        Primitive("L", f"{ref}.turn", (turned, low), lambda v: 1 / (2 * pi * bandwidth(v))),
        Primitive("C", f"{ref}.hold", (low, GROUND), lambda v: 1 / (2 * pi * bandwidth(v))),
        Primitive("E", f"{ref}.buffer", (ideal, GROUND, GROUND, last), transimpedance),
        _own("R", element, "output_resistance", (ideal, element.out)),
    ]
    if not element.passes_dc:
        cutoff, copied = _named(f"{ref}.low_cutoff"), f"{ref}.copied"
        primitives += [
            Primitive("E", f"{ref}.copy", (copied, GROUND, low, GROUND), _one),
            Primitive("C", f"{ref}.block", (copied, last), lambda v: 1 / (2 * pi * cutoff(v))),
            Primitive("R", f"{ref}.return", (last, GROUND), _one),
        ]
    input_noise = NoiseGenerator(f"{ref} input", (GROUND, element.input), lambda v: noise(v) ** 2, None)
    return tuple(primitives), (input_noise,)


@_expand.register
def _(element: Transistor) -> Parts:
    """Transconductance with input conductance, output conductance and two capacitances.

    Channel noise is 4 k T γ g_m (γ = 2/3, long channel); a bipolar transistor's collector shot noise 2 q I_C
    is the same with γ = 1/2. Base current brings its own shot noise.
    """
    ref, control, source, drain = element.ref, element.control, element.source, element.drain
    transconductance = _named(f"{ref}.transconductance")
    input_conductance = _named(f"{ref}.input_conductance")
    output_conductance = _named(f"{ref}.output_conductance")
    noise_factor = _named(f"{ref}.channel_noise_factor")
    temperature = _named("temperature")
    return (
        (
            Primitive("G", f"{ref}.channel", (drain, source, control, source), transconductance),
            Primitive("G", f"{ref}.input", (control, source, control, source), input_conductance),
            Primitive("G", f"{ref}.leak", (drain, source, drain, source), output_conductance),
            Primitive("C", f"{ref}.control_source", (control, source), _named(f"{ref}.control_source_capacitance")),
            Primitive("C", f"{ref}.control_drain", (control, drain), _named(f"{ref}.control_drain_capacitance")),
        ),
        (
            NoiseGenerator(
                f"{ref} channel",
                (drain, source),
                lambda v: 4 * BOLTZMANN * temperature(v) * noise_factor(v) * transconductance(v),
                None,
            ),
            _shot(f"{ref} control", (control, source), _named(f"{ref}.control_current")),
        ),
    )


@_expand.register
def _(element: BipolarTransistor) -> Parts:
    """As any transistor, behind the resistance of the base."""
    inner, figure = f"{element.ref}.base", "base_resistance"
    ends = (element.control, inner)
    primitives, generators = _expand.dispatch(Transistor)(replace(element, control=inner))
    return (
        (_own("R", element, figure, ends), *primitives),
        (_thermal(f"{element.ref} base", ends, _named(element.value_name(figure))), *generators),
    )


@_expand.register
def _(element: LaserDiode) -> Parts:
    ends = (element.anode, element.cathode)
    return (_own("R", element, "series_resistance", ends), _own("C", element, "capacitance", ends)), ()


@_expand.register
def _(element: MonitoredLaser) -> Parts:
    """As any laser; current through its junction, not through its capacitance, comes back from the monitor."""
    ref, ends = element.ref, (element.anode, element.cathode)
    monitor = (element.monitor_cathode, element.monitor_anode)
    gain, resistance = _named(f"{ref}.monitor_gain"), _named(f"{ref}.series_resistance")
    primitives, generators = _expand.dispatch(LaserDiode)(element)
    return (
        (
            *primitives,
            Primitive("G", f"{ref}.monitor", (*monitor, *ends), lambda v: gain(v) / resistance(v)),
            _own("C", element, "monitor_capacitance", monitor),
        ),
        (*generators, _shot(f"{ref} monitor shot", monitor, _named(f"{ref}.monitor_shot"))),
    )


@_expand.register
def _(element: Reference) -> Parts:
    ref, ends = element.ref, (element.cathode, element.anode)
    noise, resistance = _named(f"{ref}.noise"), _named(f"{ref}.output_resistance")
    return (
        (_own("R", element, "output_resistance", ends),),
        (NoiseGenerator(f"{ref} noise", ends, lambda v: (noise(v) / resistance(v)) ** 2, None),),
    )


@_signal.register
def _(element: Reference) -> tuple[tuple[str, str], Value]:
    resistance = _named(f"{element.ref}.output_resistance")
    return (element.anode, element.cathode), lambda v: 1 / resistance(v)


def _one(values: Mapping[str, Any]) -> float:
    return 1.0


def _named(name: str) -> Value:
    return lambda values: values[name]


def _own(kind: Kind, element: Element, figure: str, nodes: tuple[str, ...]) -> Primitive:
    name = element.value_name(figure)
    return Primitive(kind, name, nodes, _named(name))


def _thermal(label: str, nodes: tuple[str, str], resistance: Value) -> NoiseGenerator:
    temperature = _named("temperature")
    name = label if " " in label else f"{label} thermal"
    return NoiseGenerator(name, nodes, lambda v: 4 * BOLTZMANN * temperature(v) / resistance(v), None)


def _shot(label: str, nodes: tuple[str, str], current: Value) -> NoiseGenerator:
    return NoiseGenerator(label, nodes, lambda v: 2 * ELEMENTARY_CHARGE * current(v), None)
