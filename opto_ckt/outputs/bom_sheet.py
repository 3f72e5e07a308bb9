"""The bill of materials on paper: pages with a repeated head, room to write in, a box to tick for each line."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from opto_ckt import __version__
from opto_ckt.outputs.bom import Bom, BomLine
from opto_ckt.outputs.columns import GAP, aligned, padded, width, wrapped
from opto_ckt.outputs.ratings import loads_text

PAGE = 100  #: columns
LINES = 60  #: of a page
FORM_FEED = "\f"
BLANKS = "rating ____________  maker ____________________  number ______________________"

Entry = list[str]  #: lines of one part; never torn apart


def bom_sheet(bom: Bom) -> str:
    """The pages, each with head and number; a part is never torn apart."""
    heading, entries = _entries(bom)
    designs = list(_designs(bom))
    room = LINES - len(designs) - 4  # title, blank line, heading, blank line
    pages = _paged(entries, room)
    texts = []
    for number, page in enumerate(pages, 1):
        title = _title(bom, f"page {number} of {len(pages)}")
        texts.append("\n".join([title, *designs, "", heading, "", *(line for entry in page for line in entry)]) + "\n")
    return FORM_FEED.join(texts)


def _title(bom: Bom, number: str) -> str:
    boards = f"{bom.boards} board{'s' * (bom.boards != 1)}" + (" of each design" if len(bom.heads) > 1 else "")
    left = f"Bill of materials, {boards}"
    right = f"opto-ckt {__version__}   {number}"
    return left + " " * max(len(GAP), PAGE - width(left) - width(right)) + right


def _designs(bom: Bom) -> Iterator[str]:
    for head in bom.heads:
        revision = f", rev {head.revision}" if head.revision else ""
        name = f"{head.stem}: " if len(bom.heads) > 1 else ""
        yield from wrapped(f"{name}{head.title or head.stem}{revision}, {head.circuit}", 0, PAGE)
        yield f"{head.digest}"


def _entries(bom: Bom) -> tuple[str, list[Entry]]:
    rows = [("     item", "qty", "value", "code", "tolerance", "characteristic", "size", "needs", "sees")]
    rows += [_row(bom, item, line) for item, line in enumerate(bom.lines, 1)]
    heading, *lines = aligned(rows, "rrlllllll", indent=0)
    return heading, [[text, *_below(bom, line), ""] for text, line in zip(lines, bom.lines, strict=True)]


def _row(bom: Bom, item: int, line: BomLine) -> tuple[str, ...]:
    needs, sees = (loads_text(line.required_rating), loads_text(line.stress)) if line.fitted else ("", "")
    box = f"[ ] {padded(str(item), 5, 'r')}"
    return (box, str(bom.quantity(line)), line.value, line.code, line.tolerance, line.characteristic, line.size, needs, sees)


def _below(bom: Bom, line: BomLine) -> Iterator[str]:
    """Designators with what they are for; then room for what buying decides."""
    what = ", ".join(filter(None, (line.kind, *line.functions)))
    yield from wrapped(f"{bom.references(line)}: {what}{'' if line.fitted else '; DO NOT FIT'}", 10, PAGE)
    if line.fitted:
        yield " " * 10 + BLANKS


def _paged(entries: Sequence[Entry], room: int) -> list[list[Entry]]:
    pages: list[list[Entry]] = [[]]
    used = 0
    for entry in entries:
        if used and used + len(entry) > room:
            pages.append([])
            used = 0
        pages[-1].append(entry)
        used += len(entry)
    return pages
