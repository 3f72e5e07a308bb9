from __future__ import annotations

from dataclasses import replace

import pytest

from opto_ckt.outputs.wiring import connectivity, drawing_faults, junctions
from opto_ckt.topology import GROUND, OpAmp, Resistor, Supply, Topology
from tests.outputs.drawings import DRIVER, RECEIVER


@pytest.mark.parametrize("topology", [RECEIVER, DRIVER], ids=["receiver", "driver"])
def test_drawing_agrees_with_the_topology(topology: Topology) -> None:
    assert drawing_faults(topology) == []


def test_nodes_are_rebuilt_from_the_drawing_alone() -> None:
    found = {frozenset(pins) for pins in connectivity(RECEIVER).values()}
    assert frozenset({"D1.cathode", "R1.a", "C1.a", "U1.minus"}) in found
    assert frozenset({"R1.b", "C1.b", "U1.out", "R9.a"}) in found
    assert connectivity(RECEIVER)[GROUND] == ("U1.plus", "C8.b", "C9.a")


def test_wires_that_cross_are_not_joined() -> None:
    crossed = connectivity(DRIVER)
    assert not {"U1.plus", "U1.minus"} <= set(crossed["feedback"])
    assert (5.5, 5.5) not in junctions(DRIVER)


def test_joints_stand_where_three_ends_meet() -> None:
    assert junctions(RECEIVER) == ((3, 3.5), (3, 5), (6.5, 3), (6.5, 5))


def test_missing_wire_leaves_a_node_in_pieces() -> None:
    faults = drawing_faults(replace(RECEIVER, wires=RECEIVER.wires[1:]))
    assert "sum is in 3 pieces: D1.cathode | R1.a, C1.a | U1.minus" in faults
    assert "D1.cathode at (2, 3.5) touches nothing" in faults


def test_wire_too_many_joins_two_nodes() -> None:
    faults = drawing_faults(replace(RECEIVER, wires=(*RECEIVER.wires, ((3, 5), (6.5, 5)))))
    assert any(fault.startswith("amp and sum are joined: ") for fault in faults)


def test_mark_of_another_node_is_a_fault() -> None:
    faults = drawing_faults(replace(RECEIVER, marks=(*RECEIVER.marks[1:], ((2, 1), "positive"))))
    assert any(fault.startswith("bias and positive are joined: ") for fault in faults)


def test_wire_that_ends_nowhere_is_a_fault() -> None:
    faults = drawing_faults(replace(RECEIVER, wires=(*RECEIVER.wires, ((10, 3), (10, 2)))))
    assert faults == ["wire end at (10, 2) touches nothing"]


def test_slanted_wire_is_a_fault() -> None:
    faults = drawing_faults(replace(RECEIVER, wires=(*RECEIVER.wires, ((3, 5), (2, 3.5)))))
    assert faults == ["wire from (3, 5) to (2, 3.5) is neither level nor upright"]


def test_two_terminal_part_without_its_second_end_is_a_fault() -> None:
    elements = tuple(replace(e, to=None) if e.ref == "R9" else e for e in RECEIVER)
    assert "R9 has no place for a, b" in drawing_faults(replace(RECEIVER, elements=elements))


def test_supply_pins_of_an_op_amp_may_stay_undrawn() -> None:
    unpowered = replace(RECEIVER, marks=tuple(mark for mark in RECEIVER.marks if mark[0][0] != 5))
    assert drawing_faults(unpowered) == []


def test_supply_pin_on_the_wrong_rail_is_a_fault() -> None:
    swapped = tuple((point, "positive" if point == (5, 2) else node) for point, node in RECEIVER.marks)
    faults = drawing_faults(replace(RECEIVER, marks=swapped))
    assert any("negative and positive are joined" in fault for fault in faults)


def test_mirrored_op_amp_swaps_its_inputs_and_keeps_its_supply_pins() -> None:
    upright = OpAmp("U1", "p", "m", "o", at=(0, 0)).pin_points()
    mirrored = OpAmp("U1", "p", "m", "o", at=(0, 0), flipped=True).pin_points()
    assert mirrored == {**upright, "plus": upright["minus"], "minus": upright["plus"]}


def _divider() -> Topology:
    return Topology(
        elements=(
            Supply("VP", "positive"),
            Resistor("R1", "positive", "mid", at=(0, 2), to=(0, 0)),
            Resistor("R2", "out", GROUND, at=(3, 0), to=(3, -2)),
        ),
        input="VP",
        output=("out", GROUND),
        marks=(((0, 2), "positive"), ((3, -2), GROUND)),
        slots={"filter": ("mid", "out")},
        openings={"filter": ((0, 0), (3, 0))},
    )


def _block(width: float) -> Topology:
    return Topology(
        elements=(
            Resistor("R21", "in", "inner", at=(0, 0), to=(2, 0)),
            Resistor("R22", "inner", "out", at=(width - 2, 0), to=(width, 0)),
        ),
        input="",
        output=("out", GROUND),
        wires=(((2, 0), (width - 2, 0)),),
        marks=(((width, 0), "out"),),
        end=(width, 0),
    )


def test_gap_of_an_empty_slot_is_closed_by_a_wire() -> None:
    filled = _divider().with_blocks({})
    assert filled.wires == (((0, 0), (3, 0)),)
    assert drawing_faults(filled) == []


def test_block_wider_than_its_gap_moves_what_lies_beyond() -> None:
    filled = _divider().with_blocks({"filter": _block(5)})
    assert filled["R2"].at == (5, 0)
    assert filled["R21"].at == (0, 0)
    assert drawing_faults(filled) == []


def test_block_narrower_than_its_gap_is_joined_by_a_wire() -> None:
    opened = replace(_divider(), openings={"filter": ((0, 0), (6, 0))})
    moved = tuple(replace(e, at=(6, 0), to=(6, -2)) if e.ref == "R2" else e for e in opened)
    spread = replace(opened, elements=moved, marks=(((0, 2), "positive"), ((6, -2), GROUND)))
    filled = spread.with_blocks({"filter": _block(5)})
    assert ((5, 0), (6, 0)) in filled.wires
    assert drawing_faults(filled) == []


def test_empty_slots_in_a_row_all_join() -> None:
    chained = replace(
        _divider(), slots={"one": ("mid", "next"), "two": ("next", "out")}, openings={"one": ((0, 0), (3, 0))}
    ).with_blocks({})
    assert chained.output == ("mid", GROUND)
    assert drawing_faults(chained) == []
