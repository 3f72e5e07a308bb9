"""Blocks by name, loaded when a design asks for them."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from importlib import import_module
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from opto_ckt.circuit import Block
    from opto_ckt.request import Request

BLOCKS: Mapping[str, str] = {
    "servo": "opto_ckt.circuits.blocks.servo",
    "gain_stage": "opto_ckt.circuits.blocks.gain_stage",
    "post_filter": "opto_ckt.circuits.blocks.post_filter",
    "ac_coupling": "opto_ckt.circuits.blocks.ac_coupling",
    "decision": "opto_ckt.circuits.blocks.decision",
    "bias_filter": "opto_ckt.circuits.blocks.bias_filter",
}
"""Name, as under [blocks] and in the slots of circuits -> module whose ``BLOCK`` it is; in the order of sizing."""


def blocks_of(request: Request, places: Collection[str]) -> dict[str, Block]:
    """The blocks that a design asks for, as far as there are places for them, by name."""
    return {
        name: import_module(module).BLOCK
        for name, module in BLOCKS.items()
        if name in places and name in request.blocks_asked
    }
