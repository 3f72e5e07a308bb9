"""Decks, bill of materials, schematic and JSON of one result list the same parts."""

from __future__ import annotations

import csv
import io
import json
import re

import pytest

from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.cli.designs import read_starter
from opto_ckt.cli.files import every_file
from opto_ckt.design.sizing import size


@pytest.mark.parametrize("name", CIRCUITS)
def test_every_file_lists_the_same_parts(name: str) -> None:
    circuit = load(name)
    files = every_file(size(read_starter(circuit), circuit))
    parts = json.loads(files[f"{name}.json"])["parts"]
    fitted = {part["ref"] for part in parts if part["fitted"]}
    rows = list(csv.DictReader(io.StringIO(files[f"{name}.bom.csv"])))
    assert {ref for row in rows for ref in row["References"].split(", ")} == {part["ref"] for part in parts}
    assert sum(int(row["Quantity"]) for row in rows) == len(fitted)
    assert all(re.search(rf"\b{part['ref']}\b.*: ", files[f"{name}.bom.txt"]) for part in parts)
    assert {part["ref"] for part in parts} <= set(re.findall(r"<text[^>]*>([^<]*)</text>", files[f"{name}.svg"]))
    cards = {line.split()[0] for line in files[f"{name}.ac.cir"].splitlines()[1:] if line[:1] not in "*.+"}
    assert {ref for ref in fitted if not {ref.lower(), f"x{ref.lower()}"} & cards} == set()


@pytest.mark.parametrize("name", CIRCUITS)
def test_every_file_carries_the_marker_and_ends_its_last_line(name: str) -> None:
    circuit = load(name)
    for text in every_file(size(read_starter(circuit), circuit)).values():
        assert "opto-ckt" in text[:1024]
        assert text.endswith("\n")
