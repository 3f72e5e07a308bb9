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
INDENT = 10  #: of the lines below a part's first
LONGEST = 30  #: columns of a value; a longer name stands on a line of its own
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
    boards = f"{bom.boards} board{'s' * (bom.boards != 1)}" + (" of each design" if len(bom.designs) > 1 else "")
    left = f"Bill of materials, {boards}"
    right = f"opto-ckt {__version__}   {number}"
    return left + " " * max(len(GAP), PAGE - width(left) - width(right)) + right


def _designs(bom: Bom) -> Iterator[str]:
    for name, head in bom.designs.items():
        revision = f", rev {head.revision}" if head.revision else ""
        before = f"{name}: " if len(bom.designs) > 1 else ""
        yield from wrapped(f"{before}{head.title or head.stem}{revision}, {head.circuit}", 0, PAGE)
        yield head.digest


def _entries(bom: Bom) -> tuple[str, list[Entry]]:
    rows: list[Sequence[str]] = [("     item", "qty", "value", "code", "tolerance", "characteristic", "size")]
    rows += [_row(bom, item, line) for item, line in enumerate(bom.lines, 1)]
    heading, *lines = aligned(rows, "rrlllll", indent=0)
    return heading, [[text, *_below(bom, line), ""] for text, line in zip(lines, bom.lines, strict=True)]


def _row(bom: Bom, item: int, line: BomLine) -> tuple[str, ...]:
    value = line.value if width(line.value) <= LONGEST else line.kind
    box = f"[ ] {padded(str(item), 5, 'r')}"
    return (box, str(bom.quantity(line)), value, line.code, line.tolerance, line.characteristic, line.size)


def _below(bom: Bom, line: BomLine) -> Iterator[str]:
    """What did not fit above; designators with what they are for, loads; then room for what buying decides."""
    if width(line.value) > LONGEST:
        yield from wrapped(line.value, INDENT, PAGE)
    what = ", ".join(dict.fromkeys((line.kind, *line.functions)))
    if not line.fitted:
        yield from wrapped(f"{bom.references(line)}: {what}; DO NOT FIT", INDENT, PAGE)
        return
    needs, sees = loads_text(line.required_rating), loads_text(line.stress)
    loads = [f"{word} {text}" for word, text in (("needs", needs), ("sees", sees)) if text]
    yield from wrapped("; ".join([f"{bom.references(line)}: {what}", *loads]), INDENT, PAGE)
    yield " " * INDENT + BLANKS


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
