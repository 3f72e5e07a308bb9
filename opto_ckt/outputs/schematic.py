"""The schematic as SVG: one renderer over the placement data of any topology."""

from __future__ import annotations

import re
import sys
from functools import cache
from typing import Any
from xml.etree import ElementTree

from opto_ckt.outputs.lettering import ASCENT, SIZE, Frame, text_width
from opto_ckt.outputs.sheet import Labels, Sheet, lay_out
from opto_ckt.result import FoundPart, Result
from opto_ckt.topology import Inductor, Supply, Topology
from opto_ckt.units import write

GRID = 36.0  #: one step of the grid [pt]
MARGIN = 0.35  #: around the drawing [grid]
WIDEST = 750.0  #: between the margins of an A4 page on its side [pt]; a wider drawing is scaled down
LINE = 1.1  #: width of all lines [pt]
MARKER = "written by opto-ckt"

_UNPRINTABLE = re.compile("[^\\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")


def schematic(result: Result) -> str:
    """The schematic of a design, each part with its value or name, rails with their voltage, title below. SVG."""
    head = result.head
    labels = {part.ref: _part_lines(part) for part in result.parts}
    values = result.scenes[0].values if result.scenes else {}
    for element in result.topology:
        if isinstance(element, Inductor) and not element.fitted and element.ref in values:
            labels[element.ref] = (element.ref, write(values[element.ref], "H", 6, trim=True))
        if isinstance(element, Supply) and element.value in values:
            labels[element.node] = (element.node, write(values[element.value], "V", 6, trim=True))
    revision = f", rev {head.revision}" if head.revision else ""
    return draw(result.topology, labels, caption=f"{head.title}{revision}: {head.circuit_title}".removeprefix(": "))


def _part_lines(part: FoundPart) -> tuple[str, ...]:
    if not part.fitted:
        return part.ref, "not fitted"
    if part.value is None:
        return (part.ref, part.part) if part.part else (part.ref,)
    return part.ref, write(part.value, part.unit, 6, trim=True)


def draw(topology: Topology, labels: Labels, caption: str = "") -> str:
    """A topology's drawing as SVG text, the same bytes for the same input.

    ``labels`` holds the lines of text beside an element, by reference designator, and of a rail or named node, by
    node; what it does not name shows its own name. ``caption`` stands below. Texts are text elements in the
    reader's sans-serif face.
    """
    clean = {name: tuple(_printable(line) for line in lines) for name, lines in labels.items()}
    sheet, caption = lay_out(topology, clean), _printable(caption)
    picture = _strokes(sheet)
    frame = _page(sheet.frame, caption)
    _write_texts(picture, sheet, frame, caption)
    return ElementTree.tostring(picture, encoding="unicode") + "\n"


@cache
def _backend() -> Any:
    """The drawing library's SVG backend, loaded without its other one, which would load a plotting library."""
    other = "schemdraw.backends.mpl"
    hidden = "schemdraw" not in sys.modules and other not in sys.modules
    if hidden:
        sys.modules[other] = None  # type: ignore[assignment]  # an entry of None makes its import fail
    try:
        from schemdraw.backends import svg
    finally:
        if hidden:
            del sys.modules[other]
    return svg


def _strokes(sheet: Sheet) -> ElementTree.Element:
    """The picture with all its lines."""
    backend = _backend()
    figure = backend.Figure(bbox=backend.BBox(0, 0, 1, 1), inches_per_unit=GRID / 72)
    for shape in sheet.shapes:
        fill = "black" if shape.filled else "none"
        figure.poly(shape.points, closed=shape.closed, lw=LINE, ls="", fill=fill)
    picture = ElementTree.Element("svg", {"xmlns": "http://www.w3.org/2000/svg"})
    picture.extend(list(figure.getsvg()))
    return picture


def _page(frame: Frame, caption: str) -> Frame:
    """Drawing and caption with a margin around."""
    right = max(frame.right, frame.left + text_width(caption))
    bottom = frame.bottom - (0.9 if caption else 0)
    return Frame(frame.left - MARGIN, bottom - MARGIN, right + MARGIN, frame.top + MARGIN)


def _write_texts(picture: ElementTree.Element, sheet: Sheet, page: Frame, caption: str) -> None:
    width, height = (page.right - page.left) * GRID, (page.top - page.bottom) * GRID
    scale = min(1.0, WIDEST / width)
    picture.set("width", f"{_figure(width * scale)}pt")
    picture.set("height", f"{_figure(height * scale)}pt")
    picture.set("viewBox", " ".join(map(_figure, (page.left * GRID, -page.top * GRID, width, height))))
    picture.set("role", "img")
    title = ElementTree.Element("title")
    title.text = caption or "schematic"
    ground = ElementTree.Element("rect", {"fill": "white", "width": _figure(width), "height": _figure(height)})
    ground.set("x", _figure(page.left * GRID))
    ground.set("y", _figure(-page.top * GRID))
    picture.insert(0, ground)
    picture.insert(0, title)
    picture.insert(0, ElementTree.Comment(f" {MARKER} "))
    group = ElementTree.SubElement(picture, "g", {"font-family": "sans-serif", "font-size": _figure(SIZE * GRID)})
    for box in sheet.texts:
        for index, (text, foot) in enumerate(box.feet()):
            bold = box.heading and not index and len(box.lines) > 1
            _write(group, text, box.anchor, foot, align=box.align, bold=bold)
    if caption:
        _write(group, caption, page.left + MARGIN, page.bottom + MARGIN + ASCENT / 4, align="start", bold=False)


def _write(group: ElementTree.Element, text: str, x: float, y: float, *, align: str, bold: bool) -> None:
    line = ElementTree.SubElement(group, "text", {"x": _figure(x * GRID), "y": _figure(-y * GRID)})
    if align != "start":
        line.set("text-anchor", align)
    if bold:
        line.set("font-weight", "bold")
    line.text = text


def _figure(number: float) -> str:
    return f"{number:.2f}".rstrip("0").rstrip(".") if round(number, 2) else "0"


def _printable(text: str) -> str:
    """On one line, without what XML cannot carry."""
    return _UNPRINTABLE.sub("\ufffd", " ".join(text.split()))
