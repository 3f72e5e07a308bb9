"""Levels, tolerances, settings of many limits at once, and margins."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.limits import (
    NOMINAL,
    Limit,
    Limits,
    Requirement,
    Tolerance,
    distinct,
    effects,
    figures_at,
    least_favourable,
    one_at_a_time,
    steps_of,
    values_at,
    varying,
)

LIMITS: Limits = {
    "U1.gain_bandwidth": Limit(10.0, 6.0, 14.0),
    "RB": Limit(1e10, 1e10, 1e10),
    "R1": Tolerance(-0.01, 0.02),
}


def test_one_at_a_time_moves_only_what_varies():
    assert varying(LIMITS) == ("U1.gain_bandwidth", "R1")
    assert one_at_a_time(LIMITS) == [
        NOMINAL,
        {"U1.gain_bandwidth": "low"},
        {"U1.gain_bandwidth": "high"},
        {"R1": "low"},
        {"R1": "high"},
    ]


def test_values_at_gives_one_lane_a_corner_and_leaves_fixed_limits_as_numbers():
    corners = [NOMINAL, {"R1": "high"}, {"U1.gain_bandwidth": "low", "R1": "low"}]
    values = values_at(LIMITS, corners, {"R1": 100.0, "C1": 1e-12})
    assert values["U1.gain_bandwidth"] == pytest.approx([10.0, 10.0, 6.0])
    assert values["R1"] == pytest.approx([100.0, 102.0, 99.0])
    assert values["RB"] == 1e10
    assert values["C1"] == 1e-12


def test_values_chosen_may_be_lanes_beside_the_corners():
    corners = [{"R1": "low"}, NOMINAL, {"R1": "high"}]
    values = values_at(LIMITS, corners, {"R1": np.array([100.0, 200.0, 300.0])})
    assert values["R1"] == pytest.approx([99.0, 200.0, 306.0])


def test_a_setting_of_something_that_does_not_vary_changes_nothing():
    assert not steps_of(LIMITS, [{"RB": "high"}]).any()


def test_large_capacitor_deviates_by_its_relative_tolerance_and_drift():
    tolerance = Tolerance(-0.05, 0.05, absolute=0.1e-12, absolute_below=10e-12, drift_low=-0.01, drift_high=0.02)
    assert tolerance.at("low", 100e-12) == pytest.approx(94e-12)
    assert tolerance.at("high", 100e-12) == pytest.approx(107e-12)
    assert tolerance.at("nominal", 100e-12) == 100e-12


def test_small_capacitor_deviates_by_farads_and_drifts_with_its_value():
    tolerance = Tolerance(-0.05, 0.05, absolute=0.1e-12, absolute_below=10e-12, drift_low=-0.01, drift_high=0.02)
    assert tolerance.at("low", 1e-12) == pytest.approx(0.89e-12)
    assert tolerance.at("high", np.array([1e-12, 2e-12])) == pytest.approx([1.12e-12, 2.14e-12])


def test_a_part_left_out_stays_out_and_none_goes_below_zero():
    tolerance = Tolerance(-0.05, 0.05, absolute=0.1e-12, absolute_below=10e-12)
    assert tolerance.at("high", 0.0) == 0.0
    assert tolerance.at("low", 0.05e-12) == 0.0
    assert Tolerance(-0.2, 0.2, drift_low=-0.9).at("low", 1e-6) == 0.0


def test_drift_alone_makes_a_part_vary():
    assert Tolerance(0.0, 0.0, drift_low=-0.01).varies
    assert not Tolerance(0.0, 0.0).varies


@pytest.mark.parametrize(("side", "achieved", "margin"), [("min", 11.0, 0.1), ("max", 11.0, -0.1), ("max", 8.0, 0.2)])
def test_margin_is_a_share_of_the_bound(side, achieved, margin):
    assert Requirement("bandwidth", side, 10.0, 1.0).margin(achieved) == pytest.approx(margin)


def test_margin_of_a_small_bound_is_a_share_of_the_scale():
    assert Requirement("peaking", "max", 0.0, 0.5).margin(0.1) == pytest.approx(-0.2)


def test_nan_counts_as_missed_by_far_and_infinity_by_its_side():
    least, most = Requirement("bandwidth", "min", 10.0, 1.0), Requirement("bandwidth", "max", 10.0, 1.0)
    assert least.margin(np.nan) < -1e6
    assert most.margin(np.nan) < -1e6
    assert least.margin(np.inf) > 1e6
    assert most.margin(np.inf) < -1e6


def test_least_favourable_takes_each_worst_level_and_what_weighs_most_first():
    limits: Limits = {"a": Limit(0, -1, 1), "b": Limit(0, -1, 1), "idle": Limit(0, -1, 1), "best": Limit(0, -1, 1)}
    corners = one_at_a_time(limits)
    values = values_at(limits, corners, {})
    figure = 10 + values["a"] - 3 * values["b"] - values["best"] ** 2 * -2
    assert list(least_favourable(limits, figure, corners, smallest=True).items()) == [("b", "high"), ("a", "low")]
    assert list(least_favourable(limits, figure, corners, smallest=False).items()) == [
        ("b", "low"),
        ("best", "low"),
        ("a", "high"),
    ]


def test_least_favourable_holds_nan_worse_than_any_number_and_rounding_for_nothing():
    limits: Limits = {"a": Limit(0, -1, 1), "b": Limit(0, -1, 1)}
    figure = np.array([1.0, 0.5, np.nan, 1.0 - 1e-13, 1.0])
    for smallest in (True, False):
        assert least_favourable(limits, figure, one_at_a_time(limits), smallest=smallest)["a"] == "high"
        assert "b" not in least_favourable(limits, figure, one_at_a_time(limits), smallest=smallest)


def test_least_favourable_refuses_a_figure_of_other_corners():
    with pytest.raises(ValueError, match="3 lanes"):
        least_favourable(LIMITS, np.zeros(3), one_at_a_time(LIMITS), smallest=True)


def test_effects_of_what_is_infinite_or_undefined_throughout_are_none():
    assert effects(np.array([np.inf, np.inf, np.inf, 1.0, np.inf])) == pytest.approx([0.0, np.inf])
    assert effects(np.array([np.nan, np.nan, np.nan])) == pytest.approx([0.0])


def test_figures_are_evaluated_in_blocks_with_the_chosen_lanes_of_each(monkeypatch):
    monkeypatch.setattr("opto_ckt.limits.BLOCK", 3)
    calls = []

    def evaluate(values):
        calls.append(np.size(values["R1"]))
        return {"gain": values["R1"] * values["U1.gain_bandwidth"], "level": np.array(2.0)}

    corners = [NOMINAL, {"U1.gain_bandwidth": "low"}] * 4
    chosen = {"R1": np.arange(8.0)}
    figures = figures_at(evaluate, LIMITS, corners, chosen, ["gain", "level", "missing"])
    assert calls == [3, 3, 2]
    assert figures[0] == pytest.approx(np.arange(8.0) * np.tile([10.0, 6.0], 4))
    assert figures[1] == pytest.approx(np.full(8, 2.0))
    assert np.isnan(figures[2]).all()


@given(st.lists(st.dictionaries(st.sampled_from("abc"), st.sampled_from(["low", "high"]))))
def test_distinct_keeps_each_corner_once_in_order(corners):
    found = distinct(corners)
    assert all(corner in found for corner in corners)
    assert all(first != second for i, first in enumerate(found) for second in found[:i])
    assert found == sorted(found, key=corners.index)


def test_a_bound_of_nothing_is_kept_or_missed_by_far():
    """A bound and a scale of zero leave no measure: any distance is a large one, none is just enough."""
    least, most = (Requirement("overload", side, 0.0, 0.0) for side in ("min", "max"))
    achieved = np.array([-1e-9, 0.0, 1e-9, np.nan])
    np.testing.assert_array_equal(least.margin(achieved), [-1e9, 0.0, 1e9, -1e9])
    np.testing.assert_array_equal(most.margin(achieved), [1e9, 0.0, -1e9, -1e9])
