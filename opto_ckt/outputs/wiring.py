"""What the drawing joins: nodes rebuilt from pins, wires and marks, and their differences from the topology's."""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Iterator
from dataclasses import dataclass

from opto_ckt.outputs.strokes import snapped
from opto_ckt.outputs.symbols import drawn, optional_pins
from opto_ckt.topology import GROUND, Point, Supply, Topology

_NEAR = 1e-6  #: points closer than this are one [grid]


@dataclass(frozen=True)
class Pin:
    """One pin of a drawn element."""

    ref: str
    name: str
    node: str
    point: Point
    optional: bool = False  #: may stay undrawn

    def __str__(self) -> str:
        return f"{self.ref}.{self.name}"


@dataclass(frozen=True)
class Net:
    """Everything that the drawing joins."""

    pins: tuple[Pin, ...]
    names: tuple[str, ...]  #: nodes that marks name
    wires: int

    @property
    def name(self) -> str:
        """Node that a mark names, else its first pin."""
        return self.names[0] if self.names else str(self.pins[0]) if self.pins else ""


def pins(topology: Topology) -> tuple[Pin, ...]:
    """Pins of every drawn element that has a place."""
    found: list[Pin] = []
    for element in filter(drawn, topology):
        optional, nodes = optional_pins(element), element.nodes
        for name, point in element.pin_points().items():
            found.append(Pin(element.ref, name, nodes[name], snapped(point), name in optional))
    return tuple(found)


def wires(topology: Topology) -> tuple[tuple[Point, Point], ...]:
    """Wires of the drawing, without arithmetic noise."""
    return tuple((snapped(one), snapped(other)) for one, other in topology.wires)


def marks(topology: Topology) -> tuple[tuple[Point, str], ...]:
    """Marks of the drawing, without arithmetic noise."""
    return tuple((snapped(point), node) for point, node in topology.marks)


def rails(topology: Topology) -> frozenset[str]:
    """Nodes drawn with a symbol of their own: ground and supplies."""
    return frozenset({GROUND} | {e.node for e in topology if isinstance(e, Supply)})


def touched_points(topology: Topology) -> frozenset[Point]:
    """Points at which a wire ends or a mark stands, or where any two pins meet."""
    ends = {point for wire in wires(topology) for point in wire} | {point for point, _ in marks(topology)}
    counted = Counter(pin.point for pin in pins(topology))
    passed = {pin.point for pin in pins(topology) for wire in wires(topology) if lies_on(pin.point, wire)}
    return frozenset(ends | passed | {point for point, count in counted.items() if count > 1})


def written(point: Point) -> str:
    """A point as messages name it."""
    return f"({point[0]:g}, {point[1]:g})"


def lies_on(point: Point, wire: tuple[Point, Point]) -> bool:
    """Whether a point lies on a straight wire, its ends included."""
    (x, y), (ax, ay), (bx, by) = point, *wire
    aside = (bx - ax) * (y - ay) - (by - ay) * (x - ax)
    between = min(ax, bx) - _NEAR <= x <= max(ax, bx) + _NEAR and min(ay, by) - _NEAR <= y <= max(ay, by) + _NEAR
    return abs(aside) < _NEAR and between


def junctions(topology: Topology) -> tuple[Point, ...]:
    """Points where three or more ends meet: of wires, of pins, of symbols that marks draw."""
    touched, symbols = touched_points(topology), rails(topology)
    ends = Counter(point for wire in wires(topology) for point in wire)
    ends.update(pin.point for pin in pins(topology) if not pin.optional or pin.point in touched)
    ends.update(point for point, node in marks(topology) if node in symbols)
    for point in list(ends):
        ends[point] += sum(2 for wire in wires(topology) if point not in wire and lies_on(point, wire))
    return tuple(sorted(point for point, count in ends.items() if count >= 3))


class _Groups:
    """Things joined two by two."""

    def __init__(self) -> None:
        self._parents: dict[object, object] = {}

    def root(self, thing: object) -> object:
        parent = self._parents.setdefault(thing, thing)
        return thing if parent == thing else self.root(parent)

    def join(self, one: object, other: object) -> None:
        self._parents[self.root(one)] = self.root(other)


def nets(topology: Topology) -> tuple[Net, ...]:
    """What is joined: pins, marks and wire ends in one point or on one wire, and marks of one name.

    Wires that only cross are not joined.
    """
    groups = _Groups()
    lines, named, all_pins = wires(topology), marks(topology), pins(topology)
    points = [pin.point for pin in all_pins] + [point for point, _ in named] + [end for wire in lines for end in wire]
    for point in points:
        groups.root(point)
        for wire in lines:
            if lies_on(point, wire):
                groups.join(point, wire)
    for point, node in named:
        groups.join(point, node)
    members: dict[object, tuple[list[Pin], list[str], list[object]]] = defaultdict(lambda: ([], [], []))
    for pin in all_pins:
        members[groups.root(pin.point)][0].append(pin)
    for point, node in named:
        names = members[groups.root(point)][1]
        names.extend([node] if node not in names else [])
    for wire in lines:
        members[groups.root(wire)][2].append(wire)
    return tuple(Net(tuple(found), tuple(names), len(lines)) for found, names, lines in members.values())


def connectivity(topology: Topology) -> dict[str, tuple[str, ...]]:
    """Pins that the drawing joins, by the node that a mark names or, where none does, by their first pin."""
    return {net.name: tuple(map(str, net.pins)) for net in nets(topology)}


def drawing_faults(topology: Topology) -> list[str]:
    """Every way in which the drawing differs from the topology; empty where they agree."""
    found = list(_places(topology))
    touched = touched_points(topology)
    shown = [(net, [pin for pin in net.pins if not pin.optional or pin.point in touched]) for net in nets(topology)]
    seen: dict[str, list[str]] = defaultdict(list)
    for net, members in shown:
        nodes = sorted({pin.node for pin in members} | set(net.names))
        if len(nodes) > 1:
            found.append(f"{' and '.join(nodes)} are joined: {', '.join(map(str, members))}")
        if len(members) == 1 and not net.names and not net.wires:
            found.append(f"{members[0]} at {written(members[0].point)} touches nothing")
        for node in sorted({pin.node for pin in members}):
            seen[node].append(", ".join(str(pin) for pin in members if pin.node == node))
    apart = {node: parts for node, parts in seen.items() if len(parts) > 1}
    found += [f"{node} is in {len(parts)} pieces: {' | '.join(parts)}" for node, parts in apart.items()]
    return found + list(_loose_ends(topology))


def _places(topology: Topology) -> Iterator[str]:
    for element in filter(drawn, topology):
        lacking = [pin for pin in element.pins if pin not in element.pin_points()]
        if lacking:
            yield f"{element.ref} has no place for {', '.join(lacking)}"
        if element.to is not None and not _straight(element.at, element.to):
            yield f"{element.ref} from {written(element.at)} to {written(element.to)} is neither level nor upright"
    for one, other in topology.wires:
        if not _straight(one, other):
            yield f"wire from {written(one)} to {written(other)} is neither level nor upright"


def _straight(one: Point, other: Point) -> bool:
    return (abs(one[0] - other[0]) < _NEAR) != (abs(one[1] - other[1]) < _NEAR)


def _loose_ends(topology: Topology) -> Iterator[str]:
    held = {pin.point for pin in pins(topology)} | {point for point, _ in marks(topology)}
    lines = wires(topology)
    for index, wire in enumerate(lines):
        for end in wire:
            if end not in held and not any(lies_on(end, other) for other in lines[:index] + lines[index + 1 :]):
                yield f"wire end at {written(end)} touches nothing"


