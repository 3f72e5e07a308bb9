"""Faults of the power-controlled laser driver, computed by hand, and the limit that none of them passes."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.circuits.drivers.laser import safe_current
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from opto_ckt.design.sizing import choose_values
from opto_ckt.limits import LEVELS, Limits, values_at
from tests.circuits.lp import BIPOLAR, HIGH
from tests.circuits.sized import model, sized
from tests.near import near

CASES = (
    "supply before control", "control before supply", "slow power-down", "fast power-down and return", "brown-out",
    "reference missing", "reference short", "monitor open", "monitor short", "set resistor open", "set resistor short",
    "trimmer's wiper open", "integrator at the rail that asks for most", "integrator at the rail that asks for none",
    "op amp at the rail that turns Q1 on", "op amp at the rail that turns Q1 off", "load open", "load short",
    "load reconnected after wind-up", "sense resistor open", "sense resistor short",
    "clamp divider's lower resistor open", "pass transistor short", "cold start after a warm set-up",
    "25 K above the hottest asked for",
)  # fmt: skip
DESIGNS = {"low": (), "high": HIGH, "bipolar": BIPOLAR}


@cache
def chosen(name: str) -> tuple[Model, Limits, dict[str, float]]:
    found = model("laser-power", *DESIGNS[name])
    sizes = choose_values(found)
    return found, sizes.limits, dict(sizes.choice.values)


def reached(found: Model, values: dict[str, float], case: str) -> dict[str, float]:
    """Values after one fault, nominal otherwise."""
    (fault,) = [fault for fault in found.circuit.faults(found.request) if fault.case == case]
    overrides = {name: float(np.max(value)) for name, value in fault.overrides.items()}
    biased = found.biased({**found.nominal(), **values, **overrides})
    return {name: float(np.asarray(value)) for name, value in biased.items()}


def sound(found: Model, values: dict[str, float]) -> dict[str, float]:
    return {name: float(np.asarray(value)) for name, value in found.biased({**found.nominal(), **values}).items()}


def test_every_case_is_told_with_its_figures() -> None:
    found = sized("laser-power").faults
    assert tuple(fault.case for fault in found) == CASES
    said = {fault.case: fault.result for fault in found}
    for case in ("monitor open", "set resistor short", "integrator at the rail that asks for most"):
        assert "W of light" in said[case]
        assert "limited by the clamp" in said[case]
    assert "limited by R7" in said["op amp at the rail that turns Q1 on"]
    assert "ms until both loops" in said["load reconnected after wind-up"].replace("µs", "ms")
    assert "op amps below their least supply" in said["brown-out"]
    assert [fault.case for fault in found if not fault.ok] == ["25 K above the hottest asked for"]


def test_without_a_disable_input_its_fault_is_left_out() -> None:
    found = model("laser-power", ("enable", "enable = false"))
    assert [fault.case for fault in found.circuit.faults(found.request)] == list(CASES[1:])


@pytest.mark.parametrize("name", DESIGNS)
@pytest.mark.parametrize("case", ["monitor open", "set resistor short", "integrator at the rail that asks for most"])
def test_a_blind_loop_ends_at_the_clamp(name: str, case: str) -> None:
    """The integrator's end through R2 and R3, across R1; a bipolar transistor keeps its base current back."""
    found, _, values = chosen(name)
    lost = reached(found, values, case)
    share = values["R3"] / (values["R2"] + values["R3"])
    end = lost["node.rail"] - 0.03
    alpha = 160 / 161 if name == "bipolar" else 1.0
    assert lost["D1.current"] == near(alpha * share * end / values["R1"], rel=1e-4)
    assert lost["D1.current"] == lost["clamp_current"] < lost["hard_on_current"]
    assert lost["D1.power"] > 3 * 0.4e-3


@pytest.mark.parametrize("case", ["monitor short", "set resistor open", "integrator at the rail that asks for none"])
def test_what_looks_like_too_much_light_leaves_what_the_integrator_s_rail_lets_flow(case: str) -> None:
    found, _, values = chosen("low")
    dark = reached(found, values, case)
    share = values["R3"] / (values["R2"] + values["R3"])
    assert dark["D1.current"] == near(share * 0.03 / values["R1"], rel=2e-2)
    assert dark["D1.power"] == 0


def test_an_open_wiper_lowers_the_power() -> None:
    found, _, values = chosen("low")
    healthy, opened = sound(found, values), reached(found, values, "trimmer's wiper open")
    whole = values["R14"] + values["RV1"]
    assert opened["D1.power"] == near(1.25 / (0.3 * whole), rel=2e-3)
    assert opened["D1.power"] < healthy["D1.power"]


def test_a_missing_reference_asks_for_more_and_is_regulated_there() -> None:
    found, _, values = chosen("low")
    lost, healthy = reached(found, values, "reference missing"), sound(found, values)
    assert lost["D1.power"] / healthy["D1.power"] == near(lost["node.rail"] / 1.25, rel=2e-3)
    assert lost["D1.current"] < lost["clamp_current"]


@pytest.mark.parametrize("name", DESIGNS)
def test_a_disabled_loop_is_held_off_by_r16(name: str) -> None:
    """Through R16 the reference lifts the monitor's node past any offset: the integrator rests at its rail."""
    found, _, values = chosen(name)
    offsets = {"control.open": 1.0, "U3.offset_voltage": np.array([-1e-3, 0.0, 1e-3]), "D1.monitor_dark_current": 0.0}
    lanes = found.biased({**found.nominal(), **values, **offsets})
    assert np.all(lanes["D1.power"] == 0)
    share = values["R3"] / (values["R2"] + values["R3"])
    np.testing.assert_allclose(lanes["D1.current"], share * 0.03 / values["R1"], rtol=3e-2)


def test_without_r16_a_disabled_loop_would_rest_at_its_offset() -> None:
    """1 mV of offset across the set resistor is 1/1250 of the power; the other way there is none."""
    found, _, values = chosen("low")
    offsets = {"control.open": 1.0, "U3.offset_voltage": np.array([-1e-3, 1e-3]), "D1.monitor_dark_current": 0.0}
    lanes = found.biased({**found.nominal(), **values, **offsets, "R16": 1e15})
    assert lanes["D1.power"][0] == 0
    assert lanes["D1.power"][1] == near(0.4e-3 * 1e-3 / 1.25, rel=3e-2)


def test_a_warm_set_up_takes_the_error_to_the_cold() -> None:
    """Trimmed at 60 °C, only the difference of the monitor's errors is left: 0.5 dB, and 35/45 of it at 60 °C."""
    found, _, values = chosen("low")
    cold = found.biased(
        {
            **found.nominal(), **values, "D1.tracking_error": np.array([-0.5, 0.5]), "D1.monitor_dark_current": 0.0,
            "temperature": 253.15, "trim.temperature": 333.15,
        }
    )  # fmt: skip
    ratio = float(cold["D1.power"][1] / cold["D1.power"][0])
    assert ratio == near(10 ** ((1.0 - 1.0 * 35 / 45) / 10), rel=2e-3)


def test_a_cold_start_reaches_no_more_than_the_clamp() -> None:
    found, _, values = chosen("low")
    cold = {"temperature": 253.15, "U3.stuck": 1.0, "D1.threshold_current": 5e-3, "D1.slope_efficiency": 0.08}
    lanes = found.biased({**found.nominal(), **values, **cold})
    assert lanes["D1.current"] == near(float(lanes["clamp_current"]))
    assert 1e-3 < lanes["D1.power"] < found.request.source.power_max


def test_shorted_load_is_driven_past_the_laser_at_the_clamp() -> None:
    found, _, values = chosen("low")
    shorted = reached(found, values, "load short")
    assert shorted["D1.current"] == 0
    assert shorted["Q1.drain_current"] == near(shorted["clamp_current"], rel=1e-9)


def test_shorts_of_sense_resistor_and_transistor_leave_r7() -> None:
    found, _, values = chosen("low")
    bare = reached(found, values, "pass transistor short")
    filtered = 0.3 * values["R8"] / (0.3 + values["R8"])
    assert bare["D1.current"] == near((5.0 - 0.92) / (values["R7"] + values["R1"] + 5.0 + filtered), rel=1e-3)
    shorted = reached(found, values, "sense resistor short")
    assert bare["D1.current"] < shorted["D1.current"] < (5.0 - 0.92) / (values["R7"] + 5.0)


@settings(max_examples=20, deadline=None)
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
