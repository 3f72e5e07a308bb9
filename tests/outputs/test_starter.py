from __future__ import annotations

import tomllib

import pytest

from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.design.reading import read_text
from opto_ckt.outputs.starter import design_file, part_file
from opto_ckt.parts.record import FROM_FILE, Record, facts
from opto_ckt.parts.sections import SECTIONS, records_of
from tests.outputs.records import filled_text, needed

RECORDS = [record for section in SECTIONS for record in records_of(section)]
HEAT = {"junction_to_case": "80 K/W"}
BESIDE = {
    "BipolarData": HEAT,
    "MosfetData": HEAT,
    "JfetData": HEAT,
    "PhotodiodeData": {"material": "InGaAs", "responsivity_wavelength": "1310 nm"},
}  #: what the record asks for without a field of its own that says so: one of two thermal resistances, a known material


@pytest.mark.parametrize("record", RECORDS, ids=lambda record: record.__name__)
def test_an_empty_record_has_every_field_and_marks_the_optional_ones(record: type[Record]) -> None:
    text = part_file([record])
    active = tomllib.loads(text)[record.section]["NAME"]
    assert set(needed(record)) <= set(active)
    for name in facts(record):
        assert name == "part" or f"\n{name} " in text or f"\n# {name} " in text


@pytest.mark.parametrize("record", RECORDS, ids=lambda record: record.__name__)
def test_a_record_filled_in_as_its_comments_say_can_be_read(record: type[Record]) -> None:
    fields = tomllib.loads(filled_text(record))[record.section]["NAME"]
    record.model_validate({**fields, **BESIDE.get(record.__name__, {})}, context=dict(FROM_FILE))


@pytest.mark.parametrize("name", CIRCUITS)
def test_a_starter_reads_the_same_with_its_comments(name: str) -> None:
    circuit = load(name)
    text = design_file(circuit.starter, circuit.request)
    assert tomllib.loads(text) == tomllib.loads(circuit.starter)
    read_text(text, "starter", circuit_of=lambda name: load(name).request, circuits=CIRCUITS)


def test_fields_carry_the_words_of_data_sheets() -> None:
    circuit = load("tia")
    text = design_file(circuit.starter, circuit.request)
    assert "gain-bandwidth product" in next(line for line in text.splitlines() if line.startswith("gain_bandwidth "))
    assert any(line.startswith("# offset_drift ") for line in text.splitlines())
