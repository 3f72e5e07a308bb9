"""Texts of the schematic: how much room they take, and a place for each where it touches nothing."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from typing import Literal
from unicodedata import east_asian_width

from opto_ckt.outputs.strokes import Segment
from opto_ckt.topology import Point

SIZE = 0.28  #: of the letters [grid]
PITCH = 0.33  #: from line to line
ASCENT, DESCENT = 0.22, 0.07  #: above and below a line's foot
CLEARANCE = 0.06  #: left free around each text

_ORDINARY, _CAPITAL, _WIDE = 0.64, 0.79, 1.02  #: width of a letter over its size, from above for sans-serif faces
_WIDE_LETTERS = frozenset("MWmw@%—…∞")
_BOLD = 1.1
_EFFORT = 20_000  #: places tried before a drawing is called too crowded

Align = Literal["start", "middle", "end"]


@dataclass(frozen=True)
class TextBox:
    """Where lines of text stand; no face in common use draws them larger than this box."""

    owner: str  #: what the text belongs to
    lines: tuple[str, ...]
    left: float
    bottom: float
    right: float
    top: float
    align: Align = "start"
    heading: bool = False  #: first line stands out

    @property
    def anchor(self) -> float:
        """Where its lines begin, centre or end."""
        return {"start": self.left, "middle": (self.left + self.right) / 2, "end": self.right}[self.align]

    def feet(self) -> Iterator[tuple[str, float]]:
        """Each line with the height of its foot."""
        for index, text in enumerate(self.lines):
            yield text, self.top - ASCENT - index * PITCH

    def overlaps(self, other: TextBox) -> bool:
        """Whether two texts come closer than the clearance."""
        apart = CLEARANCE
        return (
            self.left < other.right + apart and other.left < self.right + apart
            and self.bottom < other.top + apart and other.bottom < self.top + apart
        )  # fmt: skip

    def hits(self, segment: Segment) -> bool:
        """Whether a stroke comes closer than the clearance."""
        (x, y), (to_x, to_y) = segment
        low, high = 0.0, 1.0
        for start, step, least, most in (
            (x, to_x - x, self.left - CLEARANCE, self.right + CLEARANCE),
            (y, to_y - y, self.bottom - CLEARANCE, self.top + CLEARANCE),
        ):
            if abs(step) < 1e-12:
                if not least < start < most:
                    return False
                continue
            enter, leave = sorted(((least - start) / step, (most - start) / step))
            low, high = max(low, enter), min(high, leave)
        return low < high


@dataclass(frozen=True)
class Label:
    """Lines of text with the places where they may stand, best first."""

    owner: str
    spots: tuple[TextBox, ...]
    tied: bool = False  #: has no meaning but close to its point, so chooses first


def text_width(text: str, *, bold: bool = False) -> float:
    """Room that one line takes, from above. [grid]"""
    return SIZE * sum(map(_letter_width, text)) * (_BOLD if bold else 1)


def _letter_width(letter: str) -> float:
    if letter in _WIDE_LETTERS or east_asian_width(letter) in "WF":
        return _WIDE
    return _CAPITAL if letter.isupper() else _ORDINARY


def text_size(lines: Sequence[str], *, heading: bool = False) -> Point:
    """Width and height of lines of text. [grid]"""
    width = max(text_width(text, bold=heading and not index) for index, text in enumerate(lines))
    return width, ASCENT + DESCENT + PITCH * (len(lines) - 1)


@dataclass(frozen=True)
class Frame:
    """Smallest upright rectangle around strokes."""

    left: float
    bottom: float
    right: float
    top: float

    @classmethod
    def around(cls, points: Iterable[Point]) -> Frame:
        """Frame of points."""
        xs, ys = zip(*points, strict=True)
        return cls(min(xs), min(ys), max(xs), max(ys))


_SHIFTS = (0.0, 0.25, -0.25, 0.5, -0.5, 0.75, -0.75, 1.0, -1.0)
_GAPS = (0.13, 0.2, 0.35, 0.55, 0.8)
_NEAR_GAPS = 3  #: how many of them keep a text close


def spots_around(owner: str, lines: tuple[str, ...], frame: Frame, sides: str, *, heading: bool = True) -> Label:
    """Places beside a frame, sides in the order asked for: r, l, t, b; nearest and least shifted first."""
    width, height = text_size(lines, heading=heading)
    x, y = (frame.left + frame.right) / 2, (frame.bottom + frame.top) / 2
    blank = TextBox(owner, lines, 0, 0, width, height, heading=heading)

    def spot(side: str, gap: float, shift: float) -> TextBox:
        places: dict[str, tuple[float, float, Align]] = {
            "r": (frame.right + gap, y - height / 2 + shift, "start"),
            "l": (frame.left - gap - width, y - height / 2 + shift, "end"),
            "t": (x - width / 2 + shift, frame.top + gap, "middle"),
            "b": (x - width / 2 + shift, frame.bottom - gap - height, "middle"),
        }
        return _at(blank, *places[side])

    return Label(owner, tuple(spot(side, gap, shift) for gap in _GAPS for shift in _SHIFTS for side in sides))


def spots_in_corners(owner: str, lines: tuple[str, ...], frame: Frame) -> Label:
    """Places that tuck into the corners of a frame which a body fills only in part, then all around it."""
    width, height = text_size(lines, heading=True)
    x, y = (frame.left + frame.right) / 2, (frame.bottom + frame.top) / 2
    blank = TextBox(owner, lines, 0, 0, width, height, heading=True)
    corners = [
        _at(
            blank,
            x + gap if right else x - gap - width,
            y + rise if up else y - rise - height,
            "start" if right else "end",
        )
        for rise in (0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.1)
        for gap in (0.12, 0.25, 0.4)
        for right, up in ((True, True), (True, False), (False, True), (False, False))
    ]
    return Label(owner, (*corners, *spots_around(owner, lines, frame, "tbrl").spots))


def spots_beyond(owner: str, lines: tuple[str, ...], tip: Point, away: Point, *, heading: bool = False) -> Label:
    """Places at the end of a mark, straight on first, then to its sides."""
    order = {(1, 0): "rtb", (-1, 0): "ltb", (0, 1): "trl", (0, -1): "brl"}[(round(away[0]), round(away[1]))]
    around = spots_around(owner, lines, Frame(*tip, *tip), order, heading=heading)
    return Label(owner, around.spots[: _NEAR_GAPS * len(_SHIFTS) * len(order)], tied=True)


def _at(blank: TextBox, left: float, bottom: float, align: Align) -> TextBox:
    return replace(blank, left=left, bottom=bottom, right=left + blank.right, top=bottom + blank.top, align=align)


def place_labels(labels: Sequence[Label], strokes: Sequence[Segment]) -> dict[str, TextBox]:
    """One place for each label where it touches no stroke and no other text.

    Tied labels choose first, then those with the fewest free places; a choice gives way where it leaves another none.
    Where the sheet is too crowded, a label left over stands at its best place whatever it touches.
    """
    free = {label.owner: _clear(label.spots, strokes) for label in labels}
    order = [label.owner for label in sorted(labels, key=lambda label: (not label.tied, len(free[label.owner])))]
    found = _searched(order, free)
    return {label.owner: found.get(label.owner, label.spots[0]) for label in labels}


def _clear(spots: Sequence[TextBox], strokes: Sequence[Segment]) -> list[TextBox]:
    """Spots that no stroke touches."""
    left, right = min(s.left for s in spots) - CLEARANCE, max(s.right for s in spots) + CLEARANCE
    bottom, top = min(s.bottom for s in spots) - CLEARANCE, max(s.top for s in spots) + CLEARANCE
    near = [
        ((x, y), (to_x, to_y))
        for (x, y), (to_x, to_y) in strokes
        if min(x, to_x) < right and max(x, to_x) > left and min(y, to_y) < top and max(y, to_y) > bottom
    ]
    return [spot for spot in spots if not any(map(spot.hits, near))]


def _searched(order: Sequence[str], free: dict[str, list[TextBox]]) -> dict[str, TextBox]:
    """Depth first through the free places; the deepest choice reached where no choice serves all."""
    deepest: dict[str, TextBox] = {}
    chosen: list[TextBox] = []
    trail = [iter(free[order[0]])] if order else []
    for _ in range(_EFFORT):
        if not trail or len(chosen) == len(order):
            break
        spot = next(trail[-1], None)
        if spot is None:
            trail.pop()
            if chosen:
                chosen.pop()
            continue
        if any(spot.overlaps(other) for other in chosen):
            continue
        chosen.append(spot)
        if len(chosen) > len(deepest):
            deepest = {one.owner: one for one in chosen}
        if len(chosen) < len(order):
            trail.append(iter(free[order[len(chosen)]]))
    return deepest
