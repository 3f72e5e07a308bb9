"""Decks, bill of materials, schematic and JSON of one result list the same parts."""

from __future__ import annotations

import csv
import io
import json
import re
from functools import cache

import pytest

from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.cli.designs import read_starter
from opto_ckt.cli.files import every_file
from opto_ckt.design.sizing import size


@cache
def files_of(name: str) -> dict[str, str]:
    """Every file of the design that a circuit is begun from."""
    circuit = load(name)
    return every_file(size(read_starter(circuit), circuit))


@pytest.mark.parametrize("name", CIRCUITS)
def test_every_file_lists_the_same_parts(name: str) -> None:
    files = files_of(name)
    parts = json.loads(files[f"{name}.json"])["parts"]
    fitted = {part["ref"] for part in parts if part["fitted"]}
    rows = list(csv.DictReader(io.StringIO(files[f"{name}.bom.csv"])))
    assert {ref for row in rows for ref in row["References"].split(", ")} == {part["ref"] for part in parts}
    assert sum(int(row["Quantity"]) for row in rows) == len(fitted)
    assert all(re.search(rf"\b{part['ref']}\b.*: ", files[f"{name}.bom.txt"]) for part in parts)
    assert {part["ref"] for part in parts} <= set(re.findall(r"<text[^>]*>([^<]*)</text>", files[f"{name}.svg"]))
    cards = {line.split()[0] for line in files[f"{name}.ac.cir"].splitlines()[1:] if line[:1] not in "*.+"}
    assert {ref for ref in fitted if not {f"{prefix}{ref.lower()}" for prefix in ("", "x", "m")} & cards} == set()


@pytest.mark.parametrize("name", CIRCUITS)
def test_every_file_carries_the_marker_and_ends_its_last_line(name: str) -> None:
    for text in files_of(name).values():
        assert "opto-ckt" in text[:1024]
        assert text.endswith("\n")
