"""Decoupled bias: droop, ripple, the bias that is left, a short that is survived."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest

from opto_ckt.errors import InputError
from opto_ckt.formulas import bias_filter
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
RIPPLE = """\
[bias]
supply = "12 V"
ripple = "20 mV"
ripple_frequency = "100 kHz"
[blocks]
bias_filter = { droop = "0.3 V" }
"""
FILTERED = (("", RIPPLE),)
PARTS = {"R1": 20e3, "C1": 0.8e-12, "C8": 1e-7, "C9": 1e-7, "R10": 5.9e3, "C10": 22e-9}


def test_relations() -> None:
    assert bias_filter.resistance_for_droop(droop=0.3, current=51e-6) == pytest.approx(5882.35, rel=1e-5)
    current = bias_filter.ripple_current(ripple=20e-3, capacitance=11e-12, corner=1.3e3)
    assert current == pytest.approx(1.797e-9, rel=1e-3)
    assert bias_filter.corner_for_ripple(current=current, ripple=20e-3, capacitance=11e-12) == pytest.approx(1.3e3)
    bleed = bias_filter.bleed_resistance(capacitance=1e-6, voltage=120.0, safe=60.0, duration=5.0)
    assert 120 * np.exp(-5.0 / (bleed * 1e-6)) == pytest.approx(60.0)


def test_ripple_current_is_what_the_filter_and_the_diode_let_through() -> None:
    """R10 - C10 - C_d as an impedance divider at a frequency far above the corner."""
    w = 2j * np.pi * 1e6
    resistance, capacitance, diode = 5.9e3, 22e-9, 11e-12
    far = 1 / (1 + w * resistance * (capacitance + diode))
    exact = abs(20e-3 * far * w * diode)
    corner = 1 / (2 * np.pi * resistance * capacitance)
    assert bias_filter.ripple_current(ripple=20e-3, capacitance=diode, corner=corner) == pytest.approx(exact, rel=1e-3)


def test_bias_that_is_left_is_the_supply_less_the_drop() -> None:
    found = model("tia", *FILTERED)
    values = found.biased(found.nominal() | PARTS)
    current = (
        values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"] + values["D1.dark_current"]
    )
    assert values["detector.reverse_bias"] == pytest.approx(5.0 - 5.9e3 * current, rel=1e-9)
    assert values["node.far"] == pytest.approx(-values["detector.reverse_bias"])


def test_capacitance_follows_the_bias_that_is_left() -> None:
    found = model("tia", *FILTERED)
    dark, bright = (
        found.biased(found.nominal() | PARTS | {"signal.power": power})["D1.capacitance"] for power in (0.0, 300e-6)
    )
    assert bright > 1.02 * dark


def test_an_avalanche_diode_settles_where_its_current_leaves_its_bias() -> None:
    points = '[ { bias = "30 V", gain = "3" }, { bias = "50 V", gain = "20" } ]'
    apd = ("reverse_voltage_max", f'reverse_voltage_max = "60 V"\ngain_points = {points}\ngain = "10"')
    tight = (("reverse_bias", ""), ("", '[bias]\nsupply = "60 V"\ntolerance = "0.5 %"\n[blocks]\nbias_filter = {}'))
    found = model("tia", apd, *tight)
    values = found.biased(found.nominal() | PARTS | {"R10": 1e5, "signal.power": 20e-6})
    current = (
        values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"] + values["D1.dark_current"]
    )
    supply = found.request.detector.resting_bias
    assert supply - 1e5 * current == pytest.approx(values["detector.reverse_bias"], rel=1e-6)
    assert values["D1.gain"] < 6


def test_a_shorted_detector_is_survived() -> None:
    limit = ("reverse_bias", 'reverse_bias = "12 V"')
    for changes, survived in ((FILTERED, True), ((), False)):
        faults = {fault.case: fault for fault in sized("tia", limit, *changes).faults}
        assert faults["detector short"].ok is survived


@pytest.mark.parametrize("engine", ENGINES)
def test_decks_agree(engine: str) -> None:
    rows = crosscheck(sized("tia", *FILTERED), engine)
    assert any(row.quantity == "level of far" for row in rows)
    assert [row for row in rows if not row.ok] == []


@pytest.mark.parametrize("engine", ENGINES)
def test_decks_of_a_leaky_detector_agree(engine: str) -> None:
    """Through the shunt the gain at DC differs from that of the sweep's first frequency, and a step creeps after."""
    rows = crosscheck(sized("tia", ("shunt_resistance", 'shunt_resistance = "2 MΩ"'), *FILTERED), engine)
    assert [row for row in rows if not row.ok] == []


@pytest.mark.parametrize("changes", [(), (("output  ", 'output = "anode"'),)], ids=["cathode", "anode"])
def test_the_drawing_joins_what_the_topology_joins(changes: tuple[tuple[str, str], ...]) -> None:
    assert drawing_faults(sized("tia", *FILTERED, *changes).topology) == []


def test_a_high_bias_has_a_bleed_and_a_caution() -> None:
    high = (
        ("reverse_voltage_max", 'reverse_voltage_max = "200 V"'),
        ("reverse_bias", 'reverse_bias = "120 V"'),
        ("capacitance_bias", 'capacitance_bias = "100 V"'),
    )
    result = sized("tia", *high, ("", "[blocks]\nbias_filter = {}"))
    value = {part.ref: part.value for part in result.parts}
    assert 126 * np.exp(-5.0 / (value["R11"] * value["C10"])) < 61
    assert any("keep it from touch" in caution for caution in result.cautions)


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        ((("reverse_bias", 'reverse_bias = "0 V"'), ("", "[blocks]\nbias_filter = {}")), "no bias to filter"),
        ((("", '[blocks]\nbias_filter = { droop = "7 V" }'),), "all of the bias"),
    ],
)
def test_what_does_not_go_is_refused(changes: tuple[tuple[str, str], ...], told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia", *changes)
    assert told in str(refused.value)
