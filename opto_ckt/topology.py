"""A circuit's elements and nodes, with their places on the drawing; it never holds a value.

Values live in a flat mapping beside it: ``R1`` is the value of a resistor, capacitor or inductor,
``U1.gain_bandwidth`` a figure of a part. What a figure is called is what the part's record calls it.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from math import inf
from typing import ClassVar

GROUND = "0"
OPEN = 1e15  #: resistance of an open joint in a fault [Ω]
SHORT = 1e-3  #: resistance of a short in a fault [Ω]

Point = tuple[float, float]  #: on the drawing's grid, x to the right, y upwards
RIGHT, UP, LEFT, DOWN = 0, 90, 180, 270  #: where an element faces [degrees]


@dataclass(frozen=True, kw_only=True)
class Placed:
    """What every element carries beside its nodes."""

    role: str = ""  #: what it is there for, in a word or two
    fitted: bool = True  #: False: a property of board or part, drawn in no schematic and on no bill of materials
    table: str = ""  #: table of the design file that holds its data sheet
    stock: str = ""  #: what it is chosen from: a key of the design file's [preferred]; by class where empty
    at: Point = (0, 0)
    to: Point | None = None  #: second end of a two-terminal element
    facing: int = RIGHT
    flipped: bool = False  #: mirrored across the facing axis


@dataclass(frozen=True)
class Element(Placed):
    """Base of all elements: a reference designator and named pins."""

    ref: str

    kind: ClassVar[str]  #: as printed on a bill of materials
    pins: ClassVar[tuple[str, ...]]  #: names of the fields that hold nodes, in SPICE order
    pin_places: ClassVar[Mapping[str, Point]] = {}  #: offsets from ``at`` for an element that faces right
    figures: ClassVar[tuple[str, ...]] = ()  #: figures that the small-signal model reads
    absent: ClassVar[Mapping[str, float]] = {}  #: value that stands for a figure the sheet does not give
    faults: ClassVar[Mapping[str, Mapping[str, float]]] = {}  #: case -> figure ("" is the value itself) -> override
    stocked: ClassVar[str] = ""  #: key of [preferred] that parts of this class are chosen from

    @property
    def chosen_from(self) -> str:
        """Key of the design file's [preferred] that its value is chosen from; empty for parts bought by name."""
        return self.stock or self.stocked

    @property
    def nodes(self) -> dict[str, str]:
        """Node of each pin, in pin order."""
        return {pin: getattr(self, pin) for pin in self.pins}

    def value_name(self, figure: str) -> str:
        """Name of one of its figures in the mapping of values."""
        return f"{self.ref}.{figure}" if figure else self.ref

    def pin_points(self) -> dict[str, Point]:
        """Where each pin lies on the drawing."""
        if self.to is not None:
            return dict(zip(self.pins, (self.at, self.to), strict=True))
        return {pin: self.placed(offset) for pin, offset in self.pin_places.items()}

    def placed(self, offset: Point) -> Point:
        """Where an offset from ``at``, given as the element faces right, lies on the drawing."""
        x, y = offset[0], -offset[1] if self.flipped else offset[1]
        turned = {RIGHT: (x, y), UP: (-y, x), LEFT: (-x, -y), DOWN: (y, -x)}[self.facing]
        return (self.at[0] + turned[0], self.at[1] + turned[1])


@dataclass(frozen=True)
class TwoTerminal(Element):
    """An element between two nodes."""

    a: str
    b: str
    pins: ClassVar[tuple[str, ...]] = ("a", "b")


class Resistor(TwoTerminal):
    """A resistor; its value [Ω] is named like itself."""

    kind: ClassVar[str] = "resistor"
    stocked: ClassVar[str] = "resistors"
    faults: ClassVar[Mapping[str, Mapping[str, float]]] = {"open": {"": OPEN}, "short": {"": SHORT}}


class Capacitor(TwoTerminal):
    """A capacitor; its value [F] is named like itself."""

    kind: ClassVar[str] = "capacitor"
    stocked: ClassVar[str] = "capacitors"


class Inductor(TwoTerminal):
    """An inductor; its value [H] is named like itself."""

    kind: ClassVar[str] = "inductor"
    stocked: ClassVar[str] = "inductors"
    figures: ClassVar[tuple[str, ...]] = ("resistance",)
    absent: ClassVar[Mapping[str, float]] = {"resistance": SHORT}


@dataclass(frozen=True)
class Junction(Element):
    """An element with an anode and a cathode."""

    anode: str
    cathode: str
    pins: ClassVar[tuple[str, ...]] = ("anode", "cathode")


class Diode(Junction):
    """A diode that is reverse biased in normal use."""

    kind: ClassVar[str] = "diode"
    figures: ClassVar[tuple[str, ...]] = ("capacitance",)
    absent: ClassVar[Mapping[str, float]] = {"capacitance": 1e-15}


class Photodiode(Junction):
    """A photodiode; light on it is an input of the circuit, in watts."""

    kind: ClassVar[str] = "photodiode"
    figures: ClassVar[tuple[str, ...]] = (
        "responsivity", "capacitance", "series_resistance", "shunt_resistance", "transit_frequency",
        "dark_current", "ambient_current", "signal_current",
    )  # fmt: skip
    absent: ClassVar[Mapping[str, float]] = {
        "series_resistance": SHORT,
        "shunt_resistance": 1e15,
        "transit_frequency": 1e15,
    }
    faults: ClassVar[Mapping[str, Mapping[str, float]]] = {"open": {"responsivity": 0.0}}


@dataclass(frozen=True)
class OpAmp(Element):
    """A voltage-feedback operational amplifier with two poles, output resistance, input capacitance and noise."""

    plus: str
    minus: str
    out: str
    positive: str = "positive"  #: supply pins
    negative: str = "negative"
    kind: ClassVar[str] = "op amp"
    pins: ClassVar[tuple[str, ...]] = ("plus", "minus", "out", "positive", "negative")
    pin_places: ClassVar[Mapping[str, Point]] = {
        "minus": (0, 0.5), "plus": (0, -0.5), "out": (2, 0), "positive": (1, 1), "negative": (1, -1),
    }  # fmt: skip
    figures: ClassVar[tuple[str, ...]] = (
        "gain_bandwidth", "second_pole", "open_loop_gain", "common_capacitance", "differential_capacitance",
        "output_resistance", "voltage_noise", "voltage_noise_corner", "current_noise", "current_noise_corner",
    )  # fmt: skip
    absent: ClassVar[Mapping[str, float]] = {
        "second_pole": 1e15,
        "output_resistance": SHORT,
        "voltage_noise_corner": 1e-9,
        "current_noise_corner": 1e-9,
    }

    def pin_points(self) -> dict[str, Point]:
        """Where each pin lies on the drawing; mirrored, the inputs change places and the supply pins stay."""
        points = super().pin_points()
        if self.flipped:
            points["positive"], points["negative"] = points["negative"], points["positive"]
        return points


@dataclass(frozen=True)
class Transistor(Element):
    """A transistor by its small-signal figures at the bias point; ``control`` is gate or base.

    ``table`` names its data sheet; ``polarity`` is +1 for n-channel and npn, -1 for p-channel and pnp.
    """

    drain: str  #: or collector
    control: str
    source: str  #: or emitter
    polarity: int = 1
    bipolar: bool = False  #: drawn as npn or pnp
    kind: ClassVar[str] = "transistor"
    pins: ClassVar[tuple[str, ...]] = ("drain", "control", "source")
    pin_places: ClassVar[Mapping[str, Point]] = {"control": (0, 0), "drain": (1, 1), "source": (1, -1)}
    figures: ClassVar[tuple[str, ...]] = (
        "transconductance", "input_conductance", "control_source_capacitance", "control_drain_capacitance",
        "output_conductance", "channel_noise_factor", "drain_current", "control_current",
    )  # fmt: skip


@dataclass(frozen=True)
class Switch(Element):
    """A small MOSFET that is fully off or fully on; off, only its capacitance is left."""

    drain: str
    control: str
    source: str
    polarity: int = 1
    kind: ClassVar[str] = "transistor"
    pins: ClassVar[tuple[str, ...]] = ("drain", "control", "source")
    pin_places: ClassVar[Mapping[str, Point]] = {"control": (0, 0), "drain": (1, 1), "source": (1, -1)}


class LaserDiode(Junction):
    """A laser diode by its series resistance and capacitance at the bias point."""

    kind: ClassVar[str] = "laser"
    figures: ClassVar[tuple[str, ...]] = ("series_resistance", "capacitance")
    absent: ClassVar[Mapping[str, float]] = {"capacitance": 1e-15}


@dataclass(frozen=True)
class Reference(Element):
    """A two-terminal (shunt) voltage reference; an input of the circuit, in volts."""

    cathode: str
    anode: str
    kind: ClassVar[str] = "reference"
    pins: ClassVar[tuple[str, ...]] = ("cathode", "anode")
    figures: ClassVar[tuple[str, ...]] = ("output_resistance", "noise")
    absent: ClassVar[Mapping[str, float]] = {"output_resistance": 1.0, "noise": 0.0}
    faults: ClassVar[Mapping[str, Mapping[str, float]]] = {"missing": {"voltage": 0.0}}


@dataclass(frozen=True)
class Supply(Element):
    """A supply or bias rail against ground; ideal, so ground to small signals. Its value [V] is ``value``."""

    node: str
    value: str = ""  #: name of its value, such as ``supply.positive``
    kind: ClassVar[str] = "supply"
    pins: ClassVar[tuple[str, ...]] = ("node",)


@dataclass(frozen=True)
class Terminal(Element):
    """A named point where a signal enters or leaves the board."""

    node: str
    kind: ClassVar[str] = "terminal"
    pins: ClassVar[tuple[str, ...]] = ("node",)
    pin_places: ClassVar[Mapping[str, Point]] = {"node": (0, 0)}


@dataclass(frozen=True)
class Topology:
    """Elements and nodes of a circuit, its input, output and loop, and its drawing."""

    elements: tuple[Element, ...]
    input: str  #: element that the signal enters through
    output: tuple[str, str]  #: nodes between which the answer is taken
    loop: str = ""  #: op amp at which the loop is opened
    wires: tuple[tuple[Point, Point], ...] = ()  #: straight lines of the drawing
    marks: tuple[tuple[Point, str], ...] = ()  #: points that carry a node's symbol: ground, rail or name
    slots: Mapping[str, tuple[str, str]] = field(default_factory=dict)  #: where blocks may sit: nodes before, after
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
        """Fill slots with blocks; an empty slot joins its two nodes, and a wire closes its gap in the drawing.

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
        return replace(base, slots={}, openings={})

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
        return replace(
            base,
            elements=base.elements + tuple(renamed(element, ends) for element in drawn.elements),
            wires=base.wires + drawn.wires + (((reached, end),) if reached != end else ()),
            marks=base.marks + tuple((point, ends.get(node, node)) for point, node in drawn.marks),
        )


def renamed(element: Element, names: Mapping[str, str]) -> Element:
    """The element with some of its nodes called by other names."""
    changed = {pin: names[node] for pin, node in element.nodes.items() if node in names}
    return replace(element, **changed)  # type: ignore[arg-type]  # pins are node names by construction
