"""What every record of a part has; all that the definition of a record needs is to be had from here."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, ClassVar

from opto_ckt.parts.figure import Assumed, Finding, FindingsError, Limits, Sheet, Spread
from opto_ckt.parts.reader import FROM_FILE, ReadBy, Text, Whole, plain_text, refusal, shown
from opto_ckt.parts.table import Check, Choice, FieldFacts, Points, Table, facts
from opto_ckt.parts.unit import Coefficient, EitherUnit, Unit

__all__ = [
    "FROM_FILE",
    "Assumed",
    "Check",
    "Choice",
    "Coefficient",
    "EitherUnit",
    "FieldFacts",
    "Finding",
    "FindingsError",
    "Limits",
    "Points",
    "ReadBy",
    "Record",
    "Sheet",
    "Spread",
    "Table",
    "Text",
    "Unit",
    "Whole",
    "facts",
    "plain_text",
    "refusal",
    "shown",
]


class Record(Table):
    """The figures of one part as its data sheet gives them."""

    section: ClassVar[str] = ""  #: name of the table that holds such parts in a part file

    part: Annotated[Text, Sheet("type number, order code")] = ""  #: name in the part file; empty for figures in place
    description: Annotated[Text, Sheet("title of the data sheet")] = ""
    document: Annotated[Text, Sheet("document number")] = ""
    revision: Annotated[Text, Sheet("revision, date of the data sheet")] = ""
    conditions: Annotated[Text, Sheet("test conditions")] = ""  #: under which the figures hold

    def limits(self, assumed: Mapping[str, Assumed] | None = None) -> dict[str, Limits]:
        """Limits of every figure that is given; typ-only figures are spread by `assumed`, else by the record's own."""
        chosen = assumed or {}
        return {
            name: chosen.get(name, fact.assumed).limits(value)
            for name, fact in facts(type(self)).items()
            if isinstance(value := getattr(self, name), Spread)
        }
