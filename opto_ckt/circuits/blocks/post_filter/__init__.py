"""Low-pass behind the amplifier, sized so that receiver and filter together have the wanted band.

RC section, second-order sections around followers, or a ladder of inductors and capacitors behind a resistor.
"""

from __future__ import annotations

from opto_ckt.circuit import Block
from opto_ckt.circuits.blocks.post_filter import operation, sizing, structure
from opto_ckt.formulas import filters
from opto_ckt.formulas.reference import filter_capacitance

BLOCK = Block(
    name="post_filter",
    topology=structure.topology,
    propose=sizing.propose,
    given=operation.given,
    bias=operation.bias,
    stresses=operation.stresses,
    heat=operation.heat,
    remarks=operation.remarks,
    refused=operation.refused,
    formulas=(
        filter_capacitance,
        filters.sallen_key_feedback_capacitance,
        filters.sallen_key_ground_capacitance,
        filters.scaled_inductance,
        filters.scaled_capacitance,
    ),
)
