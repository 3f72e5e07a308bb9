"""Symbols of the schematic as plain strokes on the drawing's grid, one function a class of element."""

from __future__ import annotations

from functools import singledispatch
from math import cos, hypot, pi, sin

from opto_ckt.outputs.strokes import Shape, arrow, disc, line, snapped
from opto_ckt.topology import (
    AnalogSwitch,
    Capacitor,
    ClosedSwitch,
    Diode,
    Element,
    FixedTia,
    Inductor,
    Jfet,
    LaserDiode,
    Led,
    LogicOutput,
    MonitoredLaser,
    OpAmp,
    Photodiode,
    Point,
    PulseSwitch,
    Reference,
    Supply,
    Switch,
    Terminal,
    Transistor,
    Trimmer,
)


def symbol(element: Element, touched: frozenset[Point]) -> tuple[Shape, ...]:
    """Strokes of one element, with leads to its pins; an op amp's supply pin that nothing touches is left out."""
    if not drawn(element) or not element.pin_points():
        return ()
    if element.to is not None:
        return _between(element, element.to)
    place = element.placed
    optional = {element.pin_places[pin] for pin in optional_pins(element)}
    leads = {offset for offset in optional if snapped(place(offset)) not in touched}
    return tuple(shape.mapped(place) for shape in outline(element) if not leads & set(shape.points))


def drawn(element: Element) -> bool:
    """Whether an element has a place on the drawing: fitted, or a stray with two ends; a rail is shown by marks."""
    return (element.fitted or element.to is not None) and not isinstance(element, Supply)


def optional_pins(element: Element) -> frozenset[str]:
    """Pins that may be left out of the drawing."""
    return frozenset({"positive", "negative"}) if isinstance(element, OpAmp | FixedTia) else frozenset()


def _between(element: Element, to: Point) -> tuple[Shape, ...]:
    """A two-terminal symbol in the middle of the line from ``at`` to ``to``, with its leads."""
    (x, y), length = element.at, hypot(to[0] - element.at[0], to[1] - element.at[1])
    along = ((to[0] - x) / length, (to[1] - y) / length)
    across = (along[1], -along[0]) if element.flipped else (-along[1], along[0])
    half, shapes = half_length(element), outline(element)
    reach = max(abs(point[0]) for shape in shapes for point in shape.points)
    scale = min(1.0, 0.45 * length / reach)

    def place(point: Point) -> Point:
        u, v = length / 2 + scale * point[0], scale * point[1]
        return (x + u * along[0] + v * across[0], y + u * along[1] + v * across[1])

    body = tuple(shape.mapped(place) for shape in shapes)
    return (line(element.at, place((-half, 0))), line(place((half, 0)), to), *body)


def half_length(element: Element) -> float:
    """Half the length of a two-terminal body between its leads."""
    return next((half for kind, half in _HALF_LENGTHS if isinstance(element, kind)), 0.45)


_HALF_LENGTHS: tuple[tuple[type[Element], float], ...] = (
    (Capacitor, 0.08), (AnalogSwitch, 0.4), (Inductor, 0.52), (Diode, 0.18), (Photodiode, 0.18), (LaserDiode, 0.18),
    (Led, 0.18), (Reference, 0.18),
)  # fmt: skip


@singledispatch
def outline(element: Element) -> tuple[Shape, ...]:
    """Body in its own axes: two-terminal about the origin along x, others with leads as they face right.

    An element without a symbol of its own is a box.
    """
    if element.to is not None:
        return (_box(-0.45, -0.18, 0.45, 0.18),)
    xs, ys = zip(*element.pin_places.values(), strict=True)
    return (_box(min(xs), min(ys) - 0.3, max(xs), max(ys) + 0.3),)


def _box(left: float, bottom: float, right: float, top: float) -> Shape:
    return Shape(((left, bottom), (right, bottom), (right, top), (left, top)), closed=True)


@outline.register
def _(element: Capacitor) -> tuple[Shape, ...]:
    return line((-0.08, -0.3), (-0.08, 0.3)), line((0.08, -0.3), (0.08, 0.3))


@outline.register
def _(element: AnalogSwitch) -> tuple[Shape, ...]:
    """An open contact between two rings."""
    rings = (disc((-0.34, 0), 0.06, filled=False), disc((0.34, 0), 0.06, filled=False))
    return (*rings, line((-0.29, 0.04), (0.3, 0.34)))


@outline.register
def _(element: Inductor) -> tuple[Shape, ...]:
    turns = [(hump, step) for hump in range(4) for step in range(13)]
    points = ((-0.39 + 0.26 * hump - 0.13 * cos(pi * step / 12), 0.16 * sin(pi * step / 12)) for hump, step in turns)
    return (line(*points),)


def _triangle(direction: float) -> Shape:
    """Body of a diode that conducts along +x or, for -1, along -x."""
    back, tip = -0.18 * direction, 0.18 * direction
    return Shape(((back, 0.22), (back, -0.22), (tip, 0)), closed=True)


@outline.register
def _(element: Diode) -> tuple[Shape, ...]:
    return _triangle(1), line((0.18, -0.22), (0.18, 0.22))


@outline.register
def _(element: Photodiode) -> tuple[Shape, ...]:
    light = (*arrow((-0.32, 0.74), (-0.1, 0.36)), *arrow((-0.04, 0.78), (0.18, 0.4)))
    return (_triangle(1), line((0.18, -0.22), (0.18, 0.22)), *light)


@outline.register(Led)
@outline.register(LaserDiode)
def _(element: Element) -> tuple[Shape, ...]:
    light = (*arrow((-0.1, 0.34), (0.12, 0.72)), *arrow((0.16, 0.34), (0.38, 0.72)))
    return (_triangle(1), line((0.18, -0.22), (0.18, 0.22)), *light)


@outline.register
def _(element: MonitoredLaser) -> tuple[Shape, ...]:
    """Laser and monitor side by side in one package, light going from the one to the other."""
    laser = Shape(((-0.22, 1.18), (0.22, 1.18), (0, 0.82)), closed=True)
    monitor = Shape(((1.28, 0.82), (1.72, 0.82), (1.5, 1.18)), closed=True)
    bars = (line((-0.22, 0.82), (0.22, 0.82)), line((1.28, 1.18), (1.72, 1.18)))
    leads = tuple(line((x, y), (x, middle)) for x in (0, 1.5) for y, middle in ((2, 1.18), (0, 0.82)))
    light = (*arrow((0.4, 1.12), (0.98, 1.12)), *arrow((0.4, 0.88), (0.98, 0.88)))
    return (laser, monitor, *bars, *leads, *light, _box(-0.5, 0.55, 2.0, 1.45))


@outline.register
def _(element: Trimmer) -> tuple[Shape, ...]:
    """A resistor with an arrow through it."""
    return (_box(-0.45, -0.18, 0.45, 0.18), *arrow((-0.42, -0.4), (0.42, 0.4)))


@outline.register
def _(element: Reference) -> tuple[Shape, ...]:
    return _triangle(-1), line((-0.28, -0.3), (-0.18, -0.22), (-0.18, 0.22), (-0.08, 0.3))


@outline.register
def _(element: OpAmp) -> tuple[Shape, ...]:
    return (
        Shape(((0.25, 0.9), (0.25, -0.9), (1.75, 0)), closed=True),
        line((0, 0.5), (0.25, 0.5)),
        line((0, -0.5), (0.25, -0.5)),
        line((1.75, 0), (2, 0)),
        line((1, 0.45), (1, 1)),
        line((1, -0.45), (1, -1)),
        line((0.34, 0.5), (0.54, 0.5)),
        line((0.34, -0.5), (0.54, -0.5)),
        line((0.44, -0.6), (0.44, -0.4)),
    )


@outline.register
def _(element: LogicOutput) -> tuple[Shape, ...]:
    """A buffer; what drives it is not drawn."""
    return Shape(((0.5, 0.6), (0.5, -0.6), (1.5, 0)), closed=True), line((0, 0), (0.5, 0)), line((1.5, 0), (2, 0))


@outline.register
def _(element: FixedTia) -> tuple[Shape, ...]:
    return (
        Shape(((0.25, 0.9), (0.25, -0.9), (1.75, 0)), closed=True),
        line((0, 0), (0.25, 0)),
        line((1.75, 0), (2, 0)),
        line((1, 0.45), (1, 1)),
        line((1, -0.45), (1, -1)),
    )


def _field_effect(polarity: int) -> tuple[Shape, ...]:
    """Enhancement MOSFET, body tied to source; the arrow points to an n channel."""
    tips = ((1, 0), (0.54, 0)) if polarity > 0 else ((0.54, 0), (1, 0))
    return (
        line((0, 0), (0.42, 0)),
        line((0.42, -0.36), (0.42, 0.36)),
        *(line((0.54, middle - 0.1), (0.54, middle + 0.1)) for middle in (-0.32, 0, 0.32)),
        line((0.54, 0.32), (1, 0.32), (1, 1)),
        line((0.54, -0.32), (1, -0.32), (1, -1)),
        *arrow(*tips, size=0.16),
        line((1, 0), (1, -0.32)),
    )


def _bipolar(polarity: int) -> tuple[Shape, ...]:
    """Bipolar transistor; the arrow lies at the emitter and points the way of its current."""
    near, far = (0.5, -0.16), (1.0, -0.52)
    emitter = (near, far) if polarity > 0 else (far, near)
    return (
        line((0, 0), (0.5, 0)),
        line((0.5, -0.38), (0.5, 0.38)),
        line((0.5, 0.16), (1, 0.52), (1, 1)),
        *arrow(*emitter, size=0.18),
        line((1, -0.52), (1, -1)),
    )


@outline.register
def _(element: Transistor) -> tuple[Shape, ...]:
    return _bipolar(element.polarity) if element.bipolar else _field_effect(element.polarity)


@outline.register
def _(element: Jfet) -> tuple[Shape, ...]:
    """Channel in one stroke; the gate's arrow points to an n channel."""
    tips = ((0, 0), (0.54, 0)) if element.polarity > 0 else ((0.54, 0), (0.22, 0))
    return (
        line((0, 0), (0.54, 0)),
        line((0.54, -0.4), (0.54, 0.4)),
        line((0.54, 0.26), (1, 0.26), (1, 1)),
        line((0.54, -0.26), (1, -0.26), (1, -1)),
        *arrow(*tips, size=0.18),
    )


@outline.register
def _(element: PulseSwitch) -> tuple[Shape, ...]:
    return _field_effect(1)


@outline.register
def _(element: Switch) -> tuple[Shape, ...]:
    return _field_effect(element.polarity)


@outline.register
def _(element: ClosedSwitch) -> tuple[Shape, ...]:
    return _bipolar(element.polarity) if element.bipolar else _field_effect(element.polarity)


@outline.register
def _(element: Terminal) -> tuple[Shape, ...]:
    return ()  # its ring lies away from its wire: drawn as a mark
