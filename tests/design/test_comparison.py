"""Other circuits for the same request: one line each, computed, never an error."""

from __future__ import annotations

import pytest

from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.circuits.receivers import tia
from opto_ckt.design.comparison import alternatives
from opto_ckt.design.sizing import size
from opto_ckt.outputs.report import page
from opto_ckt.request import ReceiverRequest
from tests.circuits.sized import read, sized

RECEIVERS = [name for name in CIRCUITS if issubclass(load(name).request, ReceiverRequest)]


@pytest.fixture(scope="module")
def found():
    return {other.circuit: other for other in alternatives(read("tia").request, CIRCUITS, load)}


def test_every_other_receiver_has_a_line_and_no_driver(found) -> None:
    assert set(found) == set(RECEIVERS) - {"tia"}


def test_a_line_tells_what_sizing_that_circuit_gives(found) -> None:
    other = size(read("tia", ("circuit ", 'circuit = "load-resistor"')), load("load-resistor"))
    line = found["load-resistor"]
    assert line.parts == len(other.parts)
    assert line.figures["bandwidth"] == pytest.approx(other.figure("bandwidth").nominal, rel=1e-9)
    missed = min(other.requirements, key=lambda row: float(row.requirement.margin(row.worst)))
    assert line.verdict.startswith(f"misses {missed.requirement.figure}" if not missed.met else "meets")


def test_what_a_circuit_lacks_is_said() -> None:
    analog = read("tia", ("supply ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "1.5 V"'))
    lines = {other.circuit: other.verdict for other in alternatives(analog.request, CIRCUITS, load)}
    assert lines["tia-tee"].startswith("does not go")


def test_a_driver_is_compared_with_no_receiver() -> None:
    assert not {other.circuit for other in alternatives(read("laser-current").request, CIRCUITS, load)} & set(RECEIVERS)


def test_plain_sizing_compares_nothing() -> None:
    assert sized("tia").alternatives == ()
    assert "Other circuits" not in page(sized("tia"))
    assert tia.CIRCUIT.name == "tia"
