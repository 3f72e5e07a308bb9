"""The bill of materials for spreadsheets: every cell a text that none of them computes, or takes for a date."""

from __future__ import annotations

import csv
import io
import re

from opto_ckt import __version__
from opto_ckt.outputs.bom import Bom, BomLine
from opto_ckt.outputs.ratings import loads_text
from opto_ckt.result import DesignHead

HEADINGS = (
    "Item", "Fit", "Quantity", "References", "Kind", "Value", "Code", "Tolerance", "Characteristic", "Size",
    "Required rating", "Worst stress", "Chosen rating", "Maker", "Part number", "Function", "Fitted", "Design",
    "opto-ckt",
)  # fmt: skip
BYTE_ORDER_MARK = "\ufeff"
SEPARATORS = (",", ";", "\t")

_COMPUTED = "=+-@\uff1d\uff0b\uff0d\uff20|%"  #: begin a formula somewhere; the wide forms do so in eastern editions
_MONTHS = "jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec|mär|mai|okt|dez"
_TAKEN_FOR_MORE = re.compile(
    rf"[\s(+\-.,$€£¥]*\d[\d\s.,:/\-']*(e[+-]?\d+)?\s*(%|[ap]m?|\))?|(\d+\W*)?({_MONTHS})\w*(\W*\d+)*(\W*\d+)?|true|false|wahr|falsch",
    re.IGNORECASE,
)
"""Texts that a spreadsheet would turn into a number, a date, a time or a truth value."""


def bom_csv(bom: Bom, *, separator: str = ",", byte_order_mark: bool = False) -> str:
    """The lines as CSV with a heading, one line a part; UTF-8, lines ended by a line feed."""
    text = io.StringIO(newline="")
    writer = csv.writer(text, delimiter=separator, lineterminator="\n")
    writer.writerow(HEADINGS)
    designs = "; ".join(dict.fromkeys(_design(head) for head in bom.designs.values()))
    for item, line in enumerate(bom.lines, 1):
        writer.writerow(_row(bom, item, line, designs))
    return BYTE_ORDER_MARK * byte_order_mark + text.getvalue()


def _design(head: DesignHead) -> str:
    revision = f" rev {head.revision}" if head.revision else ""
    return f"{head.title or head.stem}{revision} {head.digest}"


def _row(bom: Bom, item: int, line: BomLine, designs: str) -> list[str | int]:
    texts = (
        bom.references(line), line.kind, line.value, line.code, line.tolerance, line.characteristic,
        _size(line.size), loads_text(line.required_rating), loads_text(line.stress), "", "", line.part_number,
        ", ".join(line.functions), "yes" if line.fitted else "do not fit", designs, f"version {__version__}",
    )  # fmt: skip
    return [item, "", bom.quantity(line), *map(harmless, texts)]


def _size(size: str) -> str:
    """A size code with the word for its system, so that it keeps its leading zero."""
    return f"{size} inch" if size.isdecimal() else size


def harmless(text: str) -> str:
    """The text as a cell that stays a text: on one line, and behind an apostrophe where a spreadsheet would convert it.

    >>> harmless("=1+1"), harmless("MAR-7"), harmless("24.3 kΩ"), harmless("0603")
    ("'=1+1", "'MAR-7", '24.3 kΩ', "'0603")
    """
    line = "".join(letter if letter.isprintable() else " " for letter in text).strip()
    return f"'{line}" if (line and line[0] in _COMPUTED) or _TAKEN_FOR_MORE.fullmatch(line) else line
