from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import combinations
from typing import ClassVar

import pytest

from opto_ckt.outputs.lettering import Frame, spots_around, text_width
from opto_ckt.outputs.sheet import check_collisions, lay_out, text_boxes
from opto_ckt.outputs.symbols import symbol
from opto_ckt.topology import (
    DOWN,
    GROUND,
    LEFT,
    RIGHT,
    UP,
    Capacitor,
    Diode,
    Element,
    Inductor,
    LaserDiode,
    OpAmp,
    Photodiode,
    Reference,
    Resistor,
    Switch,
    Topology,
    Transistor,
)
from tests.outputs.drawings import DRIVER, DRIVER_LABELS, RECEIVER, RECEIVER_LABELS

TWO_TERMINAL = (Resistor, Capacitor, Inductor, Diode, Photodiode, LaserDiode, Reference)


@pytest.mark.parametrize(
    ("topology", "labels"), [(RECEIVER, RECEIVER_LABELS), (DRIVER, DRIVER_LABELS)], ids=["receiver", "driver"]
)
def test_nothing_on_the_sheet_collides(topology: Topology, labels: dict[str, tuple[str, ...]]) -> None:
    assert check_collisions(topology, labels) == []


def test_every_text_has_a_box_as_wide_as_its_longest_line() -> None:
    boxes = {box.owner: box for box in text_boxes(RECEIVER, RECEIVER_LABELS)}
    assert boxes["U1"].lines == ("U1", "HB-OA-400")
    assert boxes["U1"].right - boxes["U1"].left == pytest.approx(text_width("HB-OA-400"))
    assert not any(one.overlaps(other) for one, other in combinations(boxes.values(), 2))


def test_unfitted_elements_are_not_drawn() -> None:
    assert "CB" not in {one.owner for one in lay_out(RECEIVER, {}).symbols}


def test_part_on_another_is_reported() -> None:
    twice = replace(RECEIVER, elements=(*RECEIVER.elements, Resistor("R8", "x", "y", at=(4, 5), to=(6, 5))))
    assert "R1 touches R8" in check_collisions(twice, RECEIVER_LABELS)


def test_wire_through_a_part_is_reported() -> None:
    crossed = replace(RECEIVER, wires=(*RECEIVER.wires, ((4.75, 4.5), (4.75, 6))))
    assert any("R1 touches wire" in fault for fault in check_collisions(crossed, RECEIVER_LABELS))


def test_text_without_a_free_place_is_reported() -> None:
    crowd = Topology(
        tuple(Resistor(f"R{n}", f"a{n}", f"b{n}", at=(n * 0.5, 0), to=(n * 0.5, 1.5)) for n in range(12)),
        "",
        ("a1", GROUND),
    )
    found = check_collisions(crowd, {f"R{n}": (f"R{n}", "a value far too long for its place") for n in range(12)})
    assert any(fault.startswith("text") for fault in found)


def test_choices_give_way_where_a_text_would_have_none() -> None:
    """Three resistors so close that the middle one has room above or below alone, where its neighbours fit too."""
    row = tuple(Resistor(f"R{n}", f"a{n}", f"b{n}", at=(n * 0.7, 0), to=(n * 0.7, 2)) for n in range(3))
    trio = Topology(row, "", ("a1", GROUND))
    assert check_collisions(trio, {f"R{n}": (f"R{n}", "24.3 kΩ") for n in range(3)}) == []


@pytest.mark.parametrize("kind", TWO_TERMINAL)
@pytest.mark.parametrize("to", [(2, 0), (0, 2), (-0.5, 0), (0, -1)])
@pytest.mark.parametrize("flipped", [False, True])
def test_two_terminal_symbols_lie_between_their_pins(
    kind: type[Resistor], to: tuple[float, float], flipped: bool
) -> None:
    strokes = symbol(kind("X1", "a", "b", at=(0, 0), to=to, flipped=flipped), frozenset())
    points = [point for shape in strokes for point in shape.points]
    assert {(0, 0), to} <= set(points)
    along = [(x * to[0] + y * to[1]) / (to[0] ** 2 + to[1] ** 2) for x, y in points]
    assert min(along) >= -1e-9
    assert max(along) <= 1 + 1e-9


@pytest.mark.parametrize("facing", [RIGHT, UP, LEFT, DOWN])
@pytest.mark.parametrize("flipped", [False, True])
@pytest.mark.parametrize(
    "element",
    [
        OpAmp("X1", "a", "b", "c"),
        Transistor("X1", "a", "b", "c"),
        Transistor("X1", "a", "b", "c", polarity=-1),
        Transistor("X1", "a", "b", "c", bipolar=True),
        Transistor("X1", "a", "b", "c", polarity=-1, bipolar=True),
        Switch("X1", "a", "b", "c", polarity=-1),
    ],
    ids=["opamp", "nmos", "pmos", "npn", "pnp", "switch"],
)
def test_leads_end_at_the_pins(element: Element, facing: int, flipped: bool) -> None:
    turned = replace(element, at=(1, 2), facing=facing, flipped=flipped)
    pins = turned.pin_points()
    ends = {end for shape in symbol(turned, frozenset(pins.values())) for end in (shape.points[0], shape.points[-1])}
    assert set(pins.values()) <= ends


def test_symbols_of_kinds_and_polarities_differ() -> None:
    kinds = [Transistor("X1", "a", "b", "c", polarity=p, bipolar=b) for p in (1, -1) for b in (False, True)]
    kinds_of_two = [kind("X1", "a", "b", at=(0, 0), to=(2, 0)) for kind in TWO_TERMINAL]
    for one, other in (*combinations(kinds, 2), *combinations(kinds_of_two, 2)):
        assert symbol(one, frozenset()) != symbol(other, frozenset())


@dataclass(frozen=True)
class Module(Element):
    a: str
    b: str
    pins: ClassVar[tuple[str, ...]] = ("a", "b")
    pin_places: ClassVar[dict[str, tuple[float, float]]] = {"a": (0, 0), "b": (2, 0)}


def test_element_without_a_symbol_of_its_own_is_a_box() -> None:
    (box,) = symbol(Module("X1", "a", "b"), frozenset())
    assert box.closed
    assert Frame.around(box.points) == Frame(0, -0.3, 2, 0.3)


def test_ground_hangs_and_rails_stand_on_upright_parts() -> None:
    frames = {
        one.owner: Frame.around(point for shape in one.shapes for point in shape.points)
        for one in lay_out(RECEIVER, RECEIVER_LABELS).symbols
        if " at " in one.owner
    }
    assert frames["0 at (11.5, 3)"].top == 3
    assert frames["0 at (13.5, 5)"].bottom == 5
    assert frames["positive at (11.5, 5)"].bottom == 5
    assert frames["negative at (13.5, 3)"].top == 3


def test_first_place_beside_a_frame_is_the_side_asked_for() -> None:
    frame = Frame(0, 0, 1, 1)
    right, left = spots_around("X1", ("X1",), frame, "rl").spots[:2]
    assert right.left > 1
    assert left.right < 0
