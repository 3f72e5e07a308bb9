"""Sizes of the constant-current laser driver by hand, values that the engineer insists on, what it refuses and why."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from opto_ckt.circuit import Fitted
from opto_ckt.circuits.drivers.laser import safe_current
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.limits import Corner, values_at
from tests.circuits.lc import BIPOLAR, FACET, HIGH, NEGATIVE, POINTS, SURFACE
from tests.circuits.sized import model, sized
from tests.near import near


def proposed(found: Model) -> dict[str, Fitted]:
    return {part.ref: part for part in found.circuit.propose(found.request, Derivation(), found.bench())}


def refusal(*changes: tuple[str, str]) -> InfeasibleError:
    with pytest.raises(InfeasibleError) as refused:
        proposed(model("laser-current", *changes))
    return refused.value


@pytest.mark.parametrize(
    "changes",
    [(), HIGH, BIPOLAR, POINTS, NEGATIVE, FACET],
    ids=["low", "high", "bipolar", "points", "negative", "facet"],
)
def test_every_requirement_is_met_at_its_worst_corner(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("laser-current", *changes)
    assert [row for row in result.requirements if not row.met] == []
    assert {row.requirement.figure for row in result.requirements} >= {"current_error", "phase_margin"}
    assert [row.ref for row in result.heat if not row.ok] == []


def test_the_fail_safe_resistor_by_hand() -> None:
    """5.25 V less the least laser voltage, over the current at which the brightest laser reaches 5 mW at -20 °C."""
    found = model("laser-current")
    data, case = found.request.source, 253.15
    current = 0.03
    for _ in range(100):
        heat = current * (0.85 + 3.0 * current) - 5e-3
        junction = case + heat * (80.0 + 40.0)
        current = float(data.threshold_at(junction, 5e-3) + 5e-3 / data.slope_at(junction, 0.08))
    most = safe_current(found.request, found.bench(), Derivation())
    assert most.by_power
    assert most.current == near(current, rel=1e-6)
    tolerance = 0.01 + 100e-6 * 45
    by_hand = (5.25 - (0.85 + 3.0 * most.current)) / most.current / (1 - tolerance)
    part = proposed(found)["R7"]
    assert part.exact == near(by_hand, rel=1e-9)
    assert part.low == part.exact <= part.high


def test_the_coldest_is_not_always_the_brightest() -> None:
    """A surface emitter has its least threshold in the middle of the range, and so, with a steady slope, most light."""
    steady = ("slope_temperature", 'slope_temperature = "-0.001 %/K"')
    found = model("laser-current", *SURFACE, steady, ("power_max {18}=", 'power_max = "1.2 mW"'))
    derivation = Derivation()
    most = safe_current(found.request, found.bench(), derivation)
    assert "-20 °C" not in most.reason
    assert most.current < found.request.source.current_max


def test_sense_divider_and_soft_start_by_hand() -> None:
    parts = proposed(model("laser-current"))
    sense = parts["R1"].exact * 30e-3
    assert 0.1 <= sense <= 0.5
    assert parts["R3"].exact / (parts["R2"].exact + parts["R3"].exact) == near(sense / 1.25, rel=1e-9)
    parallel = 1 / (1 / parts["R2"].exact + 1 / parts["R3"].exact)
    most = (1 + 0.1 + 0.15) * (1 + 0.01 + 100e-6 * 45)
    assert parts["C2"].exact == near(10e-3 / (parallel * most * np.log(20)), rel=1e-9)


def test_the_filter_is_damped_at_every_corner() -> None:
    """ζ = √(L/C)/(2R) with R across L."""
    result = sized("laser-current")
    values = {part.ref: part.value for part in result.parts}
    least = values["L1"] * 0.9
    most = (values["C3"] + values["C8"]) * 1.25
    assert np.sqrt(least / most) / (2 * values["R8"] * (1.01 + 100e-6 * 45)) >= 0.7


def test_the_compensation_lies_between_ringing_and_slow() -> None:
    """Of a bipolar driver: a tenth of C1 rings at the fast corner of the op amp; at C1 it does not."""
    found = model("laser-current", *BIPOLAR)
    fitted = {ref: part.exact for ref, part in proposed(found).items()}
    fast: Corner = {"U1.gain_bandwidth": "high", "U1.second_pole": "low", "U1.output_resistance": "high"}
    at, below = (
        found.evaluate(values_at(found.limits, [fast], {**fitted, "C1": share * fitted["C1"]})) for share in (1.0, 0.2)
    )
    assert at["phase_margin"][0] >= 50
    assert at["peaking"][0] <= 0.5
    assert below["peaking"][0] > 0.5


@pytest.mark.parametrize("changes", [(), HIGH, BIPOLAR], ids=["low", "high", "bipolar"])
def test_every_fitted_part_may_be_fixed(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("laser-current", *changes)
    free = proposed(found)
    assert set(free) == {element.ref for element in found.topology.fitted if element.chosen_from}
    for ref, part in free.items():
        value = part.exact * (1.02 if ref == "R7" else 0.97)
        request = found.request.model_copy(update={"fixed": {ref: value}})
        kept = Model(found.circuit, request)
        kept.__dict__["network"] = found.network
        parts = proposed(kept)
        assert parts[ref].exact == value
        assert parts[ref].fixed
        others = [other for name, other in parts.items() if name != ref]
        assert all(np.isfinite(other.exact) and other.exact > 0 for other in others)
        figures = kept.evaluate({**kept.nominal(), **{name: other.exact for name, other in parts.items()}})
        assert float(figures["current"][0]) == near(30e-3, rel=0.05)


def test_what_is_fixed_is_kept_and_the_current_set_around_it() -> None:
    result = sized("laser-current", ("", '[fixed]\nR1 = "10 Ω"\nR7 = "82 Ω"\nC1 = "100 pF"'))
    values = {part.ref: part.value for part in result.parts}
    assert (values["R1"], values["R7"], values["C1"]) == (10.0, 82.0, 100e-12)
    assert result.verdict == "met"


@pytest.mark.parametrize("changes", [POINTS, SURFACE], ids=["listed points", "surface emitter"])
def test_lasers_of_other_laws_are_sized(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("laser-current", *changes)
    parts = proposed(found)
    figures = found.evaluate({**found.nominal(), **{ref: part.exact for ref, part in parts.items()}})
    assert float(figures["current_error"][0]) < 1e-3
    assert float(figures["compliance_margin"][0]) > 0


def test_a_power_asks_for_the_current_that_gives_it() -> None:
    found = model("laser-current", ("current  ", 'power = "1 mW"'))
    parts = proposed(found)
    figures = found.evaluate({**found.nominal(), **{ref: part.exact for ref, part in parts.items()}})
    assert float(figures["optical_power"][0]) == near(1e-3, rel=2e-3)
    remarks = sized("laser-current", ("current  ", 'power = "1 mW"')).cautions
    assert any("not trimmed" in remark for remark in remarks)


def test_a_current_that_the_cold_laser_does_not_stand_is_refused() -> None:
    refused = refusal(("current  ", 'current = "56 mA"'))
    assert "power_max" in refused.reason
    assert "-20 °C" in refused.reason
    assert any(remedy.startswith("signal.current ≤ ") for remedy in refused.remedies)


def test_a_supply_too_low_for_the_way_of_the_current_names_one_that_would_do() -> None:
    """50 mA: the fail-safe resistor takes what laser and transistor need; any remedy alone lifts the refusal."""
    refused = refusal(("current  ", 'current = "50 mA"'))
    assert "short at" in refused.reason
    assert "R7" in refused.reason
    current = next(remedy for remedy in refused.remedies if remedy.startswith("signal.current"))
    allowed = float(current.split("≤ ")[1].split(" mA")[0])
    assert proposed(model("laser-current", ("current  ", f'current = "{allowed * 0.995:.4f} mA"')))
    assert refusal(("current  ", f'current = "{allowed * 1.01:.4f} mA"'))


def test_a_supply_too_low_to_drive_the_gate_names_one_that_would_do() -> None:
    gate = ("threshold_voltage", 'threshold_voltage = { typ = "3.2 V", max = "3.9 V" }')
    stated = ("on_resistance_gate", 'on_resistance_gate = "10 V"')
    refused = refusal(gate, stated)
    assert "short of driving the transistor" in refused.reason
    supply = next(remedy for remedy in refused.remedies if remedy.startswith("conditions.supply.positive"))
    volts = float(supply.split("≥ ")[1].split(" V")[0])
    raised = ("supply  ", f'supply = {{ positive = "{volts + 0.02:.3f} V", tolerance = "5 %" }}')
    wider = ("supply_max", 'supply_max = "12 V"')
    assert proposed(model("laser-current", gate, stated, raised, wider))
    lower = ("supply  ", f'supply = {{ positive = "{volts - 0.05:.3f} V", tolerance = "5 %" }}')
    assert "short" in refusal(gate, stated, lower, wider).reason


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        ((("kind  ", 'kind = "pmos"'),), "low side"),
        ((("common  ", 'common = "laser cathode with monitor anode"'),), "high side"),
        ((("quiescent_current", 'quiescent_current = "1 mA"\nminimum_stable_gain = "5"'),), "stable from 5 on"),
        ((("common_mode_to_negative", 'common_mode_to_negative = "1 V"'),), "common"),
        ((("gate_voltage_max", 'gate_voltage_max = "5 V"'),), "gate_voltage_max"),
        ((("voltage_max  ", 'voltage_max = "5 V"'),), "voltage_max"),
        ((("voltage  ", 'voltage = "5 V"'),), "reference"),
    ],
)
def test_parts_that_do_not_suit_are_refused_by_name(changes: tuple[tuple[str, str], ...], said: str) -> None:
    refused = refusal(*changes)
    assert said in str(refused)
    assert refused.remedies


def test_a_supply_below_the_laser_is_refused_when_the_file_is_read() -> None:
    with pytest.raises(InputError, match="below the forward voltage"):
        model("laser-current", ("supply  ", 'supply = { positive = "0.9 V", tolerance = "5 %" }'))


def test_a_floating_laser_sits_where_its_transistor_does() -> None:
    floating = ("common  ", 'common = "none"')
    low, high = model("laser-current", floating), model("laser-current", floating, HIGH[1])
    assert (low.topology["D1"].nodes["anode"], high.topology["D1"].nodes["cathode"]) == ("rail", "0")


def test_remedies_are_offered_where_a_requirement_is_missed() -> None:
    result = sized("laser-current", ("loop_bandwidth", 'loop_bandwidth = { min = "1.5 MHz" }'))
    assert result.verdict == "missed"
    (row,) = [row for row in result.requirements if row.requirement.figure == "loop_bandwidth"]
    assert not row.met
    assert any(remedy.startswith("U1 gain bandwidth ≥ ") for remedy in row.remedies)


def test_cautions_say_what_can_hurt() -> None:
    said = " ".join(sized("laser-current").cautions)
    for words in ("invisible", "never look into a fibre", "competent person", "electrostatic discharge"):
        assert words in said
    blue = model("laser-current", ("wavelength  ", 'wavelength = "450 nm"'))
    values = blue.biased({**blue.nominal(), **{ref: part.exact for ref, part in proposed(blue).items()}})
    assert "invisible" not in " ".join(blue.circuit.remarks(values, blue.limits, blue.request))


def test_ageing_widens_the_laser_s_limits_one_way() -> None:
    fresh = model("laser-current", ("ageing", ""))
    aged = model("laser-current", ("ageing", 'ageing = { threshold = "50 %", slope = "-10 %" }'))
    threshold, slope = (aged.limits[f"D1.{name}"] for name in ("threshold_current", "slope_efficiency"))
    assert threshold == replace(fresh.limits["D1.threshold_current"], high=near(11e-3 * 1.5))
    assert slope == replace(fresh.limits["D1.slope_efficiency"], low=near(0.04 * 0.9))
