"""Comparator at the output: threshold, hysteresis, what they cost, what is refused."""

from __future__ import annotations

from shutil import which

import pytest
from scipy import optimize, stats

from opto_ckt.errors import InputError
from opto_ckt.formulas import comparator
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
COMPARATOR = """\
[comparator]
gain_bandwidth = "200 MHz"
open_loop_gain = "70 dB"
common_capacitance = "1.5 pF"
differential_capacitance = "0.5 pF"
voltage_noise = "10 nV/√Hz"
current_noise = "1 pA/√Hz"
offset_voltage = { typ = "0.5 mV", max = "2 mV" }
bias_current = "10 nA"
slew_rate = "200 V/µs"
swing_to_positive = "0.2 V"
swing_to_negative = "0.2 V"
output_current_max = "20 mA"
quiescent_current = "5 mA"
supply_min = "2.7 V"
supply_max = "12.6 V"
"""
DC = (("", f'{COMPARATOR}\n[blocks]\ndecision = {{ hysteresis = "4 mV" }}'),)
AC = (("", f'{COMPARATOR}\n[blocks]\nac_coupling = {{}}\ndecision = {{ hysteresis = "4 mV" }}'),)
FORMS = pytest.mark.parametrize("changes", [DC, AC], ids=["dc", "ac"])


def test_best_threshold_makes_the_fewest_errors() -> None:
    """Within the Gaussian tails, against a numerical minimum of the error ratio; the closed form neglects ln(σ1/σ0)."""
    one, zero, one_noise, zero_noise = 1.0, 0.0, 0.10, 0.08

    def errors(threshold: float) -> float:
        return float(stats.norm.sf((one - threshold) / one_noise) + stats.norm.sf((threshold - zero) / zero_noise))

    least = optimize.minimize_scalar(errors, bounds=(0.3, 0.6), method="bounded").x
    found = comparator.best_threshold(one=one, zero=zero, one_noise=one_noise, zero_noise=zero_noise)
    assert found == pytest.approx(0.4444, abs=1e-4)
    assert found == pytest.approx(least, abs=5e-3)


def test_hysteresis_is_that_of_the_divider() -> None:
    resistance = comparator.hysteresis_resistance(series=1e3, swing=10.0, hysteresis=4e-3)
    assert 10.0 * 1e3 / (1e3 + resistance) == pytest.approx(4e-3)


def test_penalty_of_a_threshold_off_by_a_fifth() -> None:
    assert comparator.threshold_penalty(error=0.2, distance=1.0) == pytest.approx(0.969, abs=1e-3)


@FORMS
def test_it_is_fitted_and_meets_every_requirement(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("tia", *changes)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert drawing_faults(result.topology) == []
    assert any("of hysteresis and" in caution for caution in result.cautions)


def test_threshold_lies_between_the_levels_where_dc_passes() -> None:
    """Mean of the levels at equal noise: average light and ambient through R1."""
    result = sized("tia", *DC)
    value = {part.ref: part.value for part in result.parts}
    threshold = 5.0 * value["R63"] / (value["R62"] + value["R63"])
    assert threshold == pytest.approx((0.9 * 2e-6 + 1e-6) * value["R1"], rel=0.12)
    assert "R62" not in {part.ref for part in sized("tia", *AC).parts}


@pytest.mark.parametrize("engine", ENGINES)
@FORMS
def test_decks_agree(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    assert [row for row in crosscheck(sized("tia", *changes), engine) if not row.ok] == []


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        ((("", "[blocks]\ndecision = {}"),), "needs a table [comparator]"),
        (
            (("bit_rate", 'band = { max = "5 MHz" }'), ("extinction_ratio", ""), *DC),
            "decides bits",
        ),
    ],
)
def test_what_does_not_go_is_refused(changes: tuple[tuple[str, str], ...], told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia", *changes)
    assert told in str(refused.value)
