"""Coupling capacitor: its cut-off from the sag of runs, what it does to midband figures and decks."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest

from opto_ckt.errors import InputError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, sized

COUPLED = (("", '[load]\nresistance = "1 kΩ"\n[blocks]\nac_coupling = { droop = "3 %" }'),)
ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]


def test_sag_stays_below_what_is_asked_at_every_corner() -> None:
    assert sized("tia", *COUPLED).figure("droop").high <= 0.03


def test_low_cutoff_is_that_of_the_capacitor_into_load_and_return() -> None:
    found = model("tia", *COUPLED)
    values = found.nominal() | {"R1": 19.1e3, "C1": 0.9e-12, "C8": 1e-7, "C9": 1e-7, "C40": 470e-9, "R40": 10e3}
    figures = found.evaluate(values)
    back = 1 / (1 / 1e3 + 1 / 10e3)
    assert figures["low_cutoff"][0] == pytest.approx(1 / (2 * np.pi * back * 470e-9), rel=2e-3)
    assert figures["transimpedance"][0] == pytest.approx(19.1e3, rel=1e-2)


def test_bandwidth_and_peaking_are_those_of_the_stage_without_it() -> None:
    """The capacitor only cuts off below: with the same parts the upper end is the same."""
    loaded = model("tia", ("", '[load]\nresistance = "1 kΩ"'))
    parts = {"R1": 19.1e3, "C1": 0.9e-12, "C8": 1e-7, "C9": 1e-7}
    plain = loaded.evaluate(loaded.nominal() | parts)
    coupled = model("tia", *COUPLED)
    figures = coupled.evaluate(coupled.nominal() | parts | {"C40": 1e-6, "R40": 1e6})
    assert figures["bandwidth"][0] == pytest.approx(plain["bandwidth"][0], rel=1e-3)
    assert figures["rise_time"][0] == pytest.approx(plain["rise_time"][0], rel=3e-3)
    assert figures["overshoot"][0] == pytest.approx(plain["overshoot"][0], abs=1e-3)


def test_a_coupled_load_alone_asks_for_it() -> None:
    result = sized("tia", ("", '[load]\nresistance = "1 kΩ"\ncoupling = "ac"'))
    assert {"C40", "R40"} <= {part.ref for part in result.parts}


@pytest.mark.parametrize("engine", ENGINES)
def test_decks_agree(engine: str) -> None:
    rows = crosscheck(sized("tia", *COUPLED), engine)
    assert any(row.quantity == "lower -3 dB frequency" for row in rows)
    assert [row for row in rows if not row.ok] == []


def test_the_drawing_joins_what_the_topology_joins() -> None:
    assert drawing_faults(sized("tia", *COUPLED).topology) == []


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        (
            (("bit_rate", 'band = { max = "5 MHz" }'), ("extinction_ratio", ""), ("", "[blocks]\nac_coupling = {}")),
            "this band begins at dc",
        ),
        ((("", '[blocks]\nac_coupling = { droop = "150 %" }'),), "is not between 0 and 100 %"),
        ((("", '[blocks]\nac_coupling = { droop = "1 %", low_cutoff = "1 Hz" }'),), "stated in more than one way"),
        ((("bandwidth ", 'low_cutoff = { max = "1 kHz" }'),), "where DC does not pass"),
    ],
)
def test_what_does_not_go_is_refused(changes: tuple[tuple[str, str], ...], told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia", *changes)
    assert told in str(refused.value)
