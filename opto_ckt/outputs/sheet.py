"""The schematic laid out: strokes of symbols, wires and marks, joints, and a box for each text."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from itertools import combinations
from math import hypot

from opto_ckt.outputs.lettering import Frame, Label, TextBox, place_labels, spots_around, spots_beyond, spots_in_corners
from opto_ckt.outputs.strokes import Segment, Shape, disc, ground_mark, port_mark, rail_mark, snapped
from opto_ckt.outputs.symbols import drawn, symbol
from opto_ckt.outputs.wiring import junctions, lies_on, marks, pins, rails, touched_points, wires, written
from opto_ckt.topology import GROUND, Element, FixedTia, OpAmp, Point, Terminal, Topology

Labels = Mapping[str, tuple[str, ...]]

_DOT = 0.065  #: radius of a joint [grid]
_DIRECTIONS: tuple[Point, ...] = ((0, -1), (0, 1), (1, 0), (-1, 0))


@dataclass(frozen=True)
class Drawn:
    """Strokes of one thing on the sheet."""

    owner: str
    shapes: tuple[Shape, ...]

    @property
    def segments(self) -> tuple[Segment, ...]:
        """All straight pieces."""
        return tuple(segment for shape in self.shapes for segment in shape.segments)


@dataclass(frozen=True)
class Sheet:
    """All that is drawn."""

    symbols: tuple[Drawn, ...]  #: elements and marks
    wires: tuple[Drawn, ...]
    dots: tuple[Drawn, ...]
    texts: tuple[TextBox, ...]

    @property
    def shapes(self) -> Iterator[Shape]:
        """Every stroke, in drawing order."""
        for one in (*self.wires, *self.symbols, *self.dots):
            yield from one.shapes

    @property
    def frame(self) -> Frame:
        """Rectangle around strokes and texts."""
        corners = [corner for box in self.texts for corner in ((box.left, box.bottom), (box.right, box.top))]
        return Frame.around(corners + [point for shape in self.shapes for point in shape.points] or [(0, 0)])


def lay_out(topology: Topology, labels: Labels) -> Sheet:
    """Strokes and texts of a topology's drawing.

    ``labels`` gives the lines beside an element, a terminal or a rail, by reference designator or node; what it does
    not name shows its own name.
    """
    touched = touched_points(topology)
    elements = [e for e in topology if drawn(e) and e.pin_points()]
    symbols = [Drawn(e.ref, symbol(e, touched)) for e in elements]
    lines = [Drawn(f"wire from {written(one)} to {written(to)}", (Shape((one, to)),)) for one, to in wires(topology)]
    strokes = [segment for one in (*symbols, *lines) for segment in one.segments]
    wanted = [_element_label(e, one, labels) for e, one in zip(elements, symbols, strict=True) if one.shapes]
    rail_nodes = rails(topology)
    signs = [(f"{node} at {written(point)}", point, node) for point, node in dict.fromkeys(marks(topology))]
    signs += [(e.ref, snapped(e.at), e.ref) for e in elements if isinstance(e, Terminal)]
    terminals = {e.ref for e in elements if isinstance(e, Terminal)}
    for owner, point, name in signs:
        leaving = _leaving(point, strokes)
        shapes, label = _mark(owner, point, name, leaving, labels, rails=rail_nodes, ring=name in terminals)
        symbols.append(Drawn(owner, shapes))
        wanted += label
    dots = tuple(Drawn(f"joint at {written(p)}", (disc(p, _DOT, filled=True),)) for p in junctions(topology))
    obstacles = [segment for one in (*symbols, *lines, *dots) for segment in one.segments]
    placed = place_labels(wanted, obstacles)
    return Sheet(tuple(symbols), tuple(lines), dots, tuple(placed[label.owner] for label in wanted))


def _element_label(element: Element, strokes: Drawn, labels: Labels) -> Label:
    lines = labels.get(element.ref, (element.ref,))
    ends = set(element.pin_points().values())
    body = [shape for shape in strokes.shapes if not ends & set(shape.points)] or list(strokes.shapes)
    frame = Frame.around(point for shape in body for point in shape.points)
    if isinstance(element, OpAmp | FixedTia):
        return spots_in_corners(element.ref, lines, frame)
    level = element.to is not None and abs(element.to[1] - element.at[1]) < abs(element.to[0] - element.at[0])
    return spots_around(element.ref, lines, frame, "tbrl" if level else "rltb")


def _leaving(point: Point, strokes: Iterable[Segment]) -> set[Point]:
    """Directions in which strokes leave a point."""
    found: set[Point] = set()
    for one, other in strokes:
        if lies_on(point, (one, other)):
            for end in (one, other):
                away = (end[0] - point[0], end[1] - point[1])
                length = hypot(*away)
                if length > 1e-6:
                    found.add((round(away[0] / length), round(away[1] / length)))
    return found


def _mark(
    owner: str, point: Point, name: str, leaving: set[Point], labels: Labels, *, rails: frozenset[str], ring: bool
) -> tuple[tuple[Shape, ...], list[Label]]:
    """Symbol and text of a mark or terminal, drawn away from what it is joined to."""
    lines = labels.get(name, (name,))
    if not ring and name == GROUND:
        return ground_mark(point, _away(leaving, (0, -1), turned=True)), []
    if not ring and name in rails:
        away = _away(leaving, (0, 1), turned=True)
        tip = (point[0] + 0.3 * away[0], point[1] + 0.3 * away[1])
        return rail_mark(point, away), [spots_beyond(owner, lines, tip, away)]
    away = _away(leaving, (1, 0), turned=False)
    if ring:
        tip = (point[0] + 0.18 * away[0], point[1] + 0.18 * away[1])
        return port_mark(point, away), [spots_beyond(owner, lines, tip, away, heading=True)]
    if away in leaving or len(leaving) > 1:
        away = next((one for one in ((0, 1), (0, -1), (1, 0), (-1, 0)) if one not in leaving), (0, 1))
    return (), [spots_beyond(owner, lines, point, away)]


def _away(leaving: set[Point], preferred: Point, *, turned: bool) -> Point:
    """Direction for a mark: straight on from a single stroke; ``turned`` ones, ground and rails, stay upright."""
    onward = [(-x, -y) for x, y in sorted(leaving) if (-x, -y) not in leaving and (not turned or x == 0)]
    free = [one for one in (preferred, *_DIRECTIONS) if one not in leaving]
    if len(leaving) == 1 and onward:
        return onward[0]
    if turned and preferred in leaving and (-preferred[0], -preferred[1]) not in leaving:
        return (-preferred[0], -preferred[1])
    return free[0] if free else preferred


def text_boxes(topology: Topology, labels: Labels) -> tuple[TextBox, ...]:
    """Every text of the drawing with the room it takes."""
    return lay_out(topology, labels).texts


def check_collisions(topology: Topology, labels: Labels) -> list[str]:
    """Everything on the drawing that touches what it should not; empty on a clean one."""
    sheet = lay_out(topology, labels)
    pairs = combinations(sheet.texts, 2)
    found = [f"texts of {one.owner} and {other.owner} overlap" for one, other in pairs if one.overlaps(other)]
    for text in sheet.texts:
        things = (*sheet.symbols, *sheet.wires, *sheet.dots)
        found += [f"text of {text.owner} touches {o.owner}" for o in things if any(map(text.hits, o.segments))]
    meeting = {pin.point for pin in pins(topology)} | {point for point, _ in marks(topology)}
    for one, other in combinations((*sheet.symbols, *sheet.wires), 2):
        if one in sheet.wires and other in sheet.wires:
            continue
        if any(_clash(a, b, meeting) for a in one.segments for b in other.segments):
            found.append(f"{one.owner} touches {other.owner}")
    return found


def _clash(one: Segment, other: Segment, meeting: set[Point]) -> bool:
    """Whether two strokes share more than a point where things are meant to meet."""
    (ax, ay), (bx, by) = one
    (cx, cy), (dx, dy) = other
    shared = [p for p in (*one, *other) if lies_on(p, one) and lies_on(p, other)]
    if len({snapped(p) for p in shared}) > 1:
        return True
    if shared:
        return snapped(shared[0]) not in meeting
    across = (bx - ax) * (dy - cy) - (by - ay) * (dx - cx)
    if abs(across) < 1e-12:
        return False
    t = ((cx - ax) * (dy - cy) - (cy - ay) * (dx - cx)) / across
    u = ((cx - ax) * (by - ay) - (cy - ay) * (bx - ax)) / across
    return 0 < t < 1 and 0 < u < 1
