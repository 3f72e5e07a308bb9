"""The loop deck: the small-signal primitives themselves, with the loop opened at one of them."""

from __future__ import annotations

from collections.abc import Sequence

from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.network.primitives import Primitive
from opto_ckt.outputs.spice_text import card, comment, deck, number
from opto_ckt.result import Result, Scene

POINTS = 100  #: a decade


def loop_deck(result: Result, scene: Scene, lines: Sequence[str], span: tuple[float, float]) -> str:
    """Return ratio on node ``ret``: the opened source is driven by 1 V; what comes back to it is turned round."""
    expansion = expand(result.topology)
    nodes = list(dict.fromkeys(node for primitive in expansion.primitives for node in primitive.nodes if node != "0"))
    names = {"0": "0"} | {node: f"n{index}" for index, node in enumerate(nodes, start=1)}
    text = [comment(f"{names[node]} is {node}") for node in nodes]
    for index, primitive in enumerate(expansion.primitives, start=1):
        text.append(_card(primitive, index, names, scene, opened=primitive.name == expansion.loop))
    opened = next(primitive for primitive in expansion.primitives if primitive.name == expansion.loop)
    text += [
        card("vlp", "lp 0 dc 0 ac 1"),
        card("eret", "ret 0", names[opened.nodes[3]], names[opened.nodes[2]], "1"),
        card("rret", "ret 0 1e6"),
        card(".ac dec", str(POINTS), *map(number, span)),
    ]
    return deck([*lines, *text])


def _card(primitive: Primitive, index: int, names: dict[str, str], scene: Scene, *, opened: bool) -> str:
    letter = primitive.kind.lower()
    nodes = [names[node] for node in primitive.nodes]
    if opened:
        nodes[2:] = ["lp", "0"]
    value = float(primitive.value(scene.values))
    if primitive.kind == "C" and value == 0:
        return ""
    if primitive.kind == "R":  # noiseless, and any value from milliohms to an open joint
        return card(f"g{index}", *nodes, *nodes, number(1 / value))
    fields = ["dc", "0"] if primitive.kind == "V" else [number(value)]
    return card(f"{letter}{index}", *nodes, *fields)
