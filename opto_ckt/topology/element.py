"""What every element of a circuit is: a designator, named pins with their nodes, a place on the drawing."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
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
    fitted: bool = True  #: False: a property of board or part, on no bill of materials, drawn where it has two ends
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


def renamed(element: Element, names: Mapping[str, str]) -> Element:
    """The element with some of its nodes called by other names."""
    changed = {pin: names[node] for pin, node in element.nodes.items() if node in names}
    return replace(element, **changed)  # type: ignore[arg-type]  # pins are node names by construction
