"""Elements to primitives: the one small-signal model that the engine, the symbolic road and the decks share."""

from __future__ import annotations

from opto_ckt.analyses.network import amplifier_models, optical_models, pulse_models, simple_models
from opto_ckt.analyses.network.element_model import model_of, signal_of
from opto_ckt.analyses.network.primitives import Expansion, NoiseGenerator, Primitive
from opto_ckt.topology import GROUND, Element, MonitoredLaser, Supply, Topology, Transistor, renamed

MODELS = (amplifier_models, optical_models, pulse_models, simple_models)
"""Each registers the elements that it knows with `model_of`."""


def expand(topology: Topology) -> Expansion:
    """The small-signal primitives and noise generators; rails are ground, what lies between them is left out."""
    rails = {element.node for element in topology if isinstance(element, Supply)}
    primitives: list[Primitive] = []
    generators: list[NoiseGenerator] = []
    grounded = {element.ref: renamed(element, dict.fromkeys(rails, GROUND)) for element in topology}
    for element in grounded.values():
        more_primitives, more_generators = model_of(element)
        primitives += [each for each in more_primitives if each.nodes[0] != each.nodes[1]]
        generators += [each for each in more_generators if each.nodes[0] != each.nodes[1]]
    nodes, gain = signal_of(grounded[topology.input])
    return Expansion(
        primitives=tuple(primitives),
        generators=tuple(generators),
        input=nodes,
        gain=gain,
        output=topology.output,
        loop=_opened(topology[topology.loop]) if topology.loop else None,
        rival=signal_of(grounded[topology.rival]) if topology.rival else None,
    )


def _opened(element: Element) -> str:
    """Primitive at which a loop is opened: an op amp's first stage, a transistor's channel, a laser's monitor."""
    if isinstance(element, MonitoredLaser):
        return f"{element.ref}.monitor"
    return f"{element.ref}.{'channel' if isinstance(element, Transistor) else 'stage1'}"
