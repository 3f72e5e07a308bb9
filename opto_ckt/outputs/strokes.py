"""Plain strokes on the drawing's grid, and the marks of ground, rails and terminals."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from math import cos, hypot, pi, sin

from opto_ckt.topology import Point

Segment = tuple[Point, Point]


@dataclass(frozen=True)
class Shape:
    """A line through points; closed it is an outline, filled a solid."""

    points: tuple[Point, ...]
    closed: bool = False
    filled: bool = False

    @property
    def segments(self) -> Iterator[Segment]:
        """Straight pieces of the line."""
        yield from zip(self.points, self.points[1:], strict=False)
        if self.closed:
            yield self.points[-1], self.points[0]

    def mapped(self, place: Callable[[Point], Point]) -> Shape:
        """The same shape elsewhere."""
        return Shape(tuple(place(point) for point in self.points), self.closed, self.filled)


def snapped(point: Point) -> Point:
    """The point without the noise of its arithmetic."""
    return (round(point[0], 6) + 0.0, round(point[1], 6) + 0.0)


def line(*points: Point) -> Shape:
    """An open line."""
    return Shape(points)


def disc(centre: Point, radius: float, *, filled: bool) -> Shape:
    """A circle, as a polygon fine enough to look round."""
    corners = (2 * pi * step / 24 for step in range(24))
    points = tuple((centre[0] + radius * cos(angle), centre[1] + radius * sin(angle)) for angle in corners)
    return Shape(points, closed=True, filled=filled)


def arrow(start: Point, tip: Point, *, size: float = 0.14) -> tuple[Shape, Shape]:
    """A line with a solid head."""
    length = hypot(tip[0] - start[0], tip[1] - start[1])
    along = ((tip[0] - start[0]) / length, (tip[1] - start[1]) / length)
    foot = (tip[0] - size * along[0], tip[1] - size * along[1])
    side = (-along[1] * size * 0.38, along[0] * size * 0.38)
    head = (tip, (foot[0] + side[0], foot[1] + side[1]), (foot[0] - side[0], foot[1] - side[1]))
    return line(start, foot), Shape(head, closed=True, filled=True)


def ground_mark(point: Point, away: Point) -> tuple[Shape, ...]:
    """Stem and three bars, the longest nearest to the point."""
    bars = ((0.28, 0.2), (0.36, 0.13), (0.44, 0.06))
    return (_stem(point, away, 0.28), *(_bar(point, away, distance, half) for distance, half in bars))


def rail_mark(point: Point, away: Point) -> tuple[Shape, ...]:
    """Stem and one bar."""
    return _stem(point, away, 0.3), _bar(point, away, 0.3, 0.2)


def port_mark(point: Point, away: Point) -> tuple[Shape, ...]:
    """A ring that touches the point."""
    return (disc((point[0] + 0.09 * away[0], point[1] + 0.09 * away[1]), 0.09, filled=False),)


def _stem(point: Point, away: Point, length: float) -> Shape:
    return line(point, (point[0] + length * away[0], point[1] + length * away[1]))


def _bar(point: Point, away: Point, distance: float, half: float) -> Shape:
    x, y = point[0] + distance * away[0], point[1] + distance * away[1]
    return line((x - half * away[1], y + half * away[0]), (x + half * away[1], y - half * away[0]))
