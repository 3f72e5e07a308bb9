"""Faults of the constant-current laser driver, computed by hand, and the limit that none of them passes."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.analyses.faults import run_faults
from opto_ckt.circuits.drivers.laser import safe_current
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from opto_ckt.design.sizing import choose_values
from opto_ckt.limits import LEVELS, Limits, values_at
from tests.circuits.lc import BIPOLAR, HIGH
from tests.circuits.sized import model, sized
from tests.near import near

CASES = (
    "supply before control", "control before supply", "slow power-down", "fast power-down and return", "brown-out",
    "reference missing", "reference short", "op amp at the rail that turns Q1 on",
    "op amp at the rail that turns Q1 off", "load open", "load short", "load reconnected after wind-up",
    "sense resistor open", "sense resistor short",
    "pass transistor short", "cold start after a warm set-up", "25 K above the hottest asked for",
)  # fmt: skip
DESIGNS = {"low": (), "high": HIGH, "bipolar": BIPOLAR}


@cache
def chosen(name: str) -> tuple[Model, Limits, dict[str, float]]:
    found = model("laser-current", *DESIGNS[name])
    sizes = choose_values(found)
    return found, sizes.limits, dict(sizes.choice.values)


def reached(found: Model, values: dict[str, float], case: str) -> dict[str, float]:
    """Values after one fault, nominal otherwise."""
    (fault,) = [fault for fault in found.circuit.faults(found.request) if fault.case == case]
    overrides = {name: float(np.max(value)) for name, value in fault.overrides.items()}
    biased = found.biased({**found.nominal(), **values, **overrides})
    return {name: float(np.asarray(value)) for name, value in biased.items()}


def test_every_case_is_told_with_its_figures() -> None:
    found = sized("laser-current").faults
    assert tuple(fault.case for fault in found) == CASES
    said = {fault.case: fault.result for fault in found}
    for case in ("brown-out", "reference missing", "sense resistor short", "load reconnected after wind-up"):
        assert "laser current" in said[case]
        assert "mA" in said[case]
        assert "W of light" in said[case]
    assert [fault.case for fault in found if not fault.ok] == ["25 K above the hottest asked for"]
    assert "case_max" in said["25 K above the hottest asked for"]


def test_without_a_disable_input_its_fault_is_left_out() -> None:
    cases = [fault.case for fault in sized("laser-current", ("enable", "enable = false")).faults]
    assert cases == [case for case in CASES if case != "supply before control"]


@pytest.mark.parametrize("name", DESIGNS)
def test_an_open_disable_input_leaves_the_offset_alone(name: str) -> None:
    found, _, values = chosen(name)
    resting = reached(found, values, "supply before control")["D1.current"]
    assert resting < 10e-6  # finite gain of the op amp; no offset at nominal
    offsets = {"control.open": 1.0, "U1.offset_voltage": np.array([-1e-3, 1e-3])}
    lanes = found.biased({**found.nominal(), **values, **offsets})
    assert np.max(lanes["D1.current"]) == near(1e-3 / values["R1"], rel=0.05)


def test_a_missing_reference_raises_the_set_voltage_to_what_r6_leaves() -> None:
    found, _, values = chosen("low")
    lost = reached(found, values, "reference missing")
    by_hand = lost["node.rail"] * values["R3"] / (values["R2"] + values["R3"] + values["R6"])
    assert lost["node.set"] == near(by_hand, rel=1e-3)
    assert lost["regulated_current"] > 1.5 * 30e-3
    assert lost["D1.current"] == near(lost["hard_on_current"], rel=1e-9)


def test_shorted_sense_resistor_and_transistor_leave_r7_and_the_laser() -> None:
    found, _, values = chosen("low")
    bare = reached(found, values, "pass transistor short")
    filtered = 0.3 * values["R8"] / (0.3 + values["R8"])
    total = values["R7"] + values["R1"] + 5.0 + filtered
    assert bare["D1.current"] == near((5.0 - 0.92) / total, rel=1e-3)  # the others' current through the filter apart
    shorted = reached(found, values, "sense resistor short")
    assert bare["D1.current"] < shorted["D1.current"] < (5.0 - 0.92) / (values["R7"] + 5.0)


def test_shorted_load_is_regulated_past_the_laser_and_heats_the_transistor() -> None:
    found, _, values = chosen("low")
    shorted, sound = reached(found, values, "load short"), found.biased({**found.nominal(), **values})
    assert shorted["D1.current"] == 0
    assert shorted["Q1.drain_current"] == near(float(np.asarray(sound["D1.current"])), rel=1e-4)
    more = shorted["Q1.drain_current"] * float(np.asarray(sound["D1.forward_voltage"]))
    assert shorted["Q1.power"] - float(np.asarray(sound["Q1.power"])) == near(more, rel=1e-2)


@pytest.mark.parametrize("case", ["load open", "sense resistor open", "op amp at the rail that turns Q1 off"])
def test_open_circuits_and_a_dead_amplifier_give_no_current(case: str) -> None:
    found, _, values = chosen("low")
    assert reached(found, values, case)["D1.current"] < 1e-9


def test_an_amplifier_below_its_least_supply_is_not_trusted() -> None:
    """Brown-out: from 2.7 V down the op amp is taken as hard on, so that the current is all that the supply gives."""
    found, _, values = chosen("low")
    supplies = np.linspace(0.0, 5.25, 200)
    lanes = found.biased({**found.nominal(), **values, "supply.positive": supplies})
    lost = supplies < 2.7
    np.testing.assert_array_equal(lanes["D1.current"][lost], lanes["hard_on_current"][lost])
    assert np.all(np.diff(lanes["hard_on_current"]) >= 0)
    assert np.max(lanes["D1.current"]) == near(float(lanes["D1.current"][-1]), rel=1e-9)


def test_a_swept_override_runs_every_lane_at_each_row() -> None:
    """A brown-out told at two corners at once is the worst of both told alone."""
    found, limits, values = chosen("low")
    corners = [{"U2.voltage": "low"}, {"U2.voltage": "high"}]
    both = run_faults(found.circuit, values_at(limits, corners, values), found.request)
    high = run_faults(found.circuit, values_at(limits, corners[1:], values), found.request)
    place = CASES.index("brown-out")
    assert both[place].result == high[place].result


@settings(max_examples=25, deadline=None)
@given(name=st.sampled_from(sorted(DESIGNS)), seed=st.integers(0, 2**32 - 1))
def test_no_fault_passes_the_fail_safe_limit(name: str, seed: int) -> None:
    """Whatever the corner, supply from none to most: never more current or light than the laser stands."""
    found, limits, values = chosen(name)
    random = np.random.default_rng(seed)
    names = [key for key, limit in limits.items() if limit.varies]
    corners = [{key: LEVELS[random.integers(0, 3)] for key in names} for _ in range(40)]
    lanes = values_at(limits, corners, values)
    most = safe_current(found.request, found.bench(), Derivation()).current
    for fault in found.circuit.faults(found.request):
        supply = random.uniform(0.0, 5.25, 40)
        swept = {key: value.ravel()[random.integers(0, value.size, 40)] for key, value in fault.overrides.items()
                 if np.ndim(value) == 2}  # fmt: skip
        plain = {key: np.full(40, value) for key, value in fault.overrides.items() if np.ndim(value) < 2}
        biased = found.biased({**lanes, "supply.positive": supply, **plain, **swept})
        assert np.all(biased["D1.current"] <= most * (1 + 1e-9)), fault.case
        if fault.case != "25 K above the hottest asked for":
            assert np.all(biased["D1.power"] <= found.request.source.power_max * (1 + 1e-6)), fault.case
