"""A circuit's elements together: its input, output, loop and slots, and its drawing."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from math import inf

from opto_ckt.topology.element import Element, Point, renamed
from opto_ckt.topology.elements import Supply, Terminal


@dataclass(frozen=True)
class Topology:
    """Elements and nodes of a circuit, its input, output and loop, and its drawing."""

    elements: tuple[Element, ...]
    input: str  #: element that the signal enters through
    output: tuple[str, str]  #: nodes between which the answer is taken
    loop: str = ""  #: op amp, transistor or monitored laser at which the loop is opened
    trigger: str = ""  #: logic output that starts a pulse of the current through the input
    rival: str = ""  #: another element that a signal may enter through, to compare its answer with
    wires: tuple[tuple[Point, Point], ...] = ()  #: straight lines of the drawing
    marks: tuple[tuple[Point, str], ...] = ()  #: points that carry a node's symbol: ground, rail or name
    slots: Mapping[str, tuple[str, str]] = field(default_factory=dict)  #: where blocks may sit: nodes before, after
    taps: Mapping[str, tuple[str, str]] = field(default_factory=dict)  #: where blocks may hang on; empty, nothing joins
    openings: Mapping[str, tuple[Point, Point]] = field(default_factory=dict)  #: gap left for each slot: origin, end
    end: Point = (0, 0)  #: of a block: where its ``out`` lies, its ``in`` being the origin

    def __iter__(self) -> Iterator[Element]:
        return iter(self.elements)

    def __getitem__(self, ref: str) -> Element:
        return next(element for element in self.elements if element.ref == ref)

    @property
    def fitted(self) -> tuple[Element, ...]:
        """Elements that an assembler fits."""
        return tuple(e for e in self.elements if e.fitted and not isinstance(e, Supply | Terminal))

    def without(self, refs: frozenset[str]) -> Topology:
        """The same circuit with some elements left unfitted and undrawn."""
        return replace(self, elements=tuple(e for e in self.elements if e.ref not in refs))

    def with_blocks(self, blocks: Mapping[str, Topology]) -> Topology:
        """Fill slots and taps with blocks; an empty slot joins its nodes, and a wire closes its gap in the drawing.

        A block calls its ends ``in`` and ``out`` and keeps other nodes to itself. It is drawn from the slot's origin;
        where it is wider than the gap, all that lies beyond the gap moves to the right.
        """
        names: dict[str, str] = {}
        for slot, (before, after) in self.slots.items():
            if slot not in blocks:
                names[after] = names.get(before, before)
        base = replace(
            self,
            elements=tuple(renamed(element, names) for element in self.elements),
            output=(names.get(self.output[0], self.output[0]), names.get(self.output[1], self.output[1])),
            marks=tuple((point, names.get(node, node)) for point, node in self.marks),
        )
        for slot, (before, after) in self.slots.items():
            ends = {"in": names.get(before, before), "out": names.get(after, after)}
            base = base._filled(slot, blocks.get(slot, Topology((), "", ("in", "out"))), ends)
        for tap, (before, after) in self.taps.items():
            if tap in blocks:
                ends = {"in": names.get(before, before), "out": names.get(after, after)}
                base = base._hung(blocks[tap].moved(base.openings[tap][0]), ends)
        return replace(base, slots={}, taps={}, openings={})

    def moved(self, by: Point, beyond: float = -inf) -> Topology:
        """The same circuit drawn elsewhere, or only what lies at or right of ``beyond`` moved."""

        def place(point: Point) -> Point:
            return (point[0] + by[0], point[1] + by[1]) if point[0] >= beyond else point

        return replace(
            self,
            elements=tuple(replace(e, at=place(e.at), to=None if e.to is None else place(e.to)) for e in self.elements),
            wires=tuple((place(one), place(other)) for one, other in self.wires),
            marks=tuple((place(point), node) for point, node in self.marks),
            openings={slot: (place(origin), place(end)) for slot, (origin, end) in self.openings.items()},
        )

    def _filled(self, slot: str, block: Topology, ends: Mapping[str, str]) -> Topology:
        """With one block, its ends called as in ``ends``, in the gap of a slot."""
        origin, end = self.openings.get(slot, ((0, 0), (0, 0)))
        room = max(0, origin[0] + block.end[0] - end[0])
        base = self.moved((room, 0), beyond=end[0]) if room else self
        drawn = block.moved(origin)
        reached, end = (origin[0] + block.end[0], origin[1] + block.end[1]), (end[0] + room, end[1])
        return replace(base, wires=base.wires + (((reached, end),) if reached != end else ()))._hung(drawn, ends)

    def _hung(self, block: Topology, ends: Mapping[str, str]) -> Topology:
        """With a block that is drawn where it belongs, its ends called as in ``ends``."""
        return replace(
            self,
            elements=self.elements + tuple(renamed(element, ends) for element in block.elements),
            wires=self.wires + block.wires,
            marks=self.marks + tuple((point, ends.get(node, node)) for point, node in block.marks),
        )
