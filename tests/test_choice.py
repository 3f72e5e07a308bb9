"""The chooser against brute force, its ties, its windows, and its search where there is too much to try."""

from __future__ import annotations

from itertools import product
from math import inf, log

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.choice import DIGITS, EDGE, ENOUGH, choose
from opto_ckt.circuit import Fitted
from opto_ckt.limits import Limit, Limits, Requirement, Tolerance, values_at, varying
from opto_ckt.preferred import commonness, values

LEVELS = ("low", "nominal", "high")


def every_corner(limits):
    names = varying(limits)
    return [dict(zip(names, levels, strict=True)) for levels in product(LEVELS, repeat=len(names))]


def worst_margins(chosen, evaluate, requirements, limits, corners):
    figures = evaluate(values_at(limits, corners, chosen))
    return [float(np.min(requirement.margin(figures[requirement.figure]))) for requirement in requirements]


def rank(chosen, fitted, margins):
    """The order of the design, written a second time."""
    missed = sum(round(margin, DIGITS) < 0 for margin in margins)
    distance = sum(abs(log(chosen[part.ref] / part.exact)) for part in fitted)
    lines = len({(part.ref[0], chosen[part.ref]) for part in fitted})
    rarity = sum(commonness(chosen[part.ref], part.series) for part in fitted)
    return missed, -round(min(*margins, ENOUGH), DIGITS), round(distance, DIGITS), lines, rarity


exponent = st.floats(-2, 2).filter(lambda power: abs(power) > 0.05)


@st.composite
def posynomials(draw):
    """Sums of two power laws that agree in direction: the worst corner is known, the best trade-off is not."""
    weights = [draw(st.floats(0.2, 2)), draw(st.floats(0.2, 2))]
    signs = {name: draw(st.sampled_from([-1, 1])) for name in ("R1", "C1", "speed", "load")}
    powers = [{name: sign * draw(st.floats(0.1, 2)) for name, sign in signs.items()} for _ in range(2)]

    def figure(v):
        return sum(
            weight * np.prod(np.broadcast_arrays(*(np.asarray(v[name]) ** p for name, p in power.items())), axis=0)
            for weight, power in zip(weights, powers, strict=True)
        )

    return figure


@settings(max_examples=60, deadline=None)
@given(st.data())
def test_never_worse_than_brute_force_over_the_whole_windows(data):
    """All series values of the windows at all 81 combinations of low, nominal and high."""
    exact = {ref: data.draw(st.floats(1.0, 9.9), label=ref) for ref in ("R1", "C1")}
    reach = data.draw(st.floats(1.02, 1.45), label="window")
    series = data.draw(st.sampled_from(["E6", "E12"]), label="series")
    fitted = tuple(Fitted(ref, x, series, low=x / reach, high=x * reach) for ref, x in exact.items())
    limits: Limits = {
        "R1": Tolerance(-0.01, 0.01),
        "C1": Tolerance(-0.05, 0.05),
        "speed": Limit(1.0, 0.7, 1.3),
        "load": Limit(1.0, 0.8, 1.25),
    }
    figures = {name: data.draw(posynomials(), label=name) for name in ("first", "second")}

    def evaluate(v):
        return {name: figure(v) for name, figure in figures.items()}

    at_exact = {name: float(figure({**exact, "speed": 1.0, "load": 1.0})) for name, figure in figures.items()}
    requirements = [
        Requirement(name, data.draw(st.sampled_from(["min", "max"])), at * data.draw(st.floats(0.3, 3)), 1e-6)
        for name, at in at_exact.items()
    ]
    choice = choose(fitted, evaluate, requirements, limits)

    corners = every_corner(limits)
    windows = [values(part.series, part.low * (1 - EDGE), part.high * (1 + EDGE)) for part in fitted]
    if not all(windows):
        assert choice.notes
        return
    assert max(map(len, windows)) <= 5
    best = min(
        rank(chosen, fitted, worst_margins(chosen, evaluate, requirements, limits, corners))
        for combination in product(*windows)
        for chosen in [dict(zip(exact, combination, strict=True))]
    )
    assert choice.exhaustive
    assert rank(choice.values, fitted, worst_margins(choice.values, evaluate, requirements, limits, corners)) == best


@settings(max_examples=60, deadline=None)
@given(st.lists(st.floats(-1, 1), min_size=12, max_size=12), st.sampled_from(["min", "max"]))
def test_with_any_interactions_the_best_at_the_corners_it_names(weights, side):
    """Quadratic forms, for which a corner put together from single moves need not be the worst."""
    fitted = tuple(Fitted(ref, exact, "E24") for ref, exact in (("R1", 3.1), ("R2", 4.4), ("C1", 2.05)))
    limits: Limits = {"R1": Tolerance(-0.05, 0.05), "C1": Tolerance(-0.1, 0.1), "x": Limit(1.0, 0.5, 1.5)}

    def evaluate(v):
        r1, r2, c1, x = (np.asarray(v[name]) for name in ("R1", "R2", "C1", "x"))
        terms = (r1, r2, c1, x, r1 * r2, r1 * c1, r2 * c1, r1 * x, r2 * x, c1 * x, x * x, c1 * c1)
        return {"figure": sum(weight * term for weight, term in zip(weights, terms, strict=True))}

    bound = float(evaluate({"R1": 3.1, "R2": 4.4, "C1": 2.05, "x": 1.0})["figure"])
    requirement = Requirement("figure", side, bound, 1.0)
    choice = choose(fitted, evaluate, [requirement], limits)
    pools = [sorted(values("E24", 1, 9.9), key=lambda value, e=part.exact: abs(log(value / e)))[:5] for part in fitted]
    best = min(
        rank(chosen, fitted, worst_margins(chosen, evaluate, [requirement], limits, choice.corners))
        for combination in product(*pools)
        for chosen in [dict(zip(("R1", "R2", "C1"), combination, strict=True))]
    )
    margins = worst_margins(choice.values, evaluate, [requirement], limits, choice.corners)
    assert rank(choice.values, fitted, margins) == best
    assert choice.tried == 125
    assert choice.margins[0] <= margins[0]
    assert 1 <= choice.rounds <= 5


def through(v):
    return {"gain": v["R1"] / v["R2"]}


def test_ratio_of_two_is_kept_by_rounding_both_the_same_way():
    """10.9 and 1.11 each alone would go to 10 and 1.2; a bound on their ratio is what decides."""
    fitted = (Fitted("R1", 10.9, "E12"), Fitted("R2", 1.11, "E12"))
    assert choose(fitted, through, [], {}).values == {"R1": 10.0, "R2": 1.2}
    bounds = [Requirement("gain", "min", 9.5, 1.0), Requirement("gain", "max", 10.5, 1.0)]
    choice = choose(fitted, through, bounds, {})
    assert choice.values == {"R1": 12.0, "R2": 1.2}
    assert min(choice.margins) > 0


def test_margins_beyond_five_percent_do_not_count():
    fitted = (Fitted("R1", 4.8, "E12"),)
    choice = choose(fitted, lambda v: {"gain": v["R1"]}, [Requirement("gain", "min", 1.0, 1.0)], {})
    assert choice.values == {"R1": 4.7}


def test_an_asked_figure_outweighs_nearness():
    fitted = (Fitted("R1", 4.8, "E12"),)
    choice = choose(fitted, lambda v: {"gain": v["R1"]}, [Requirement("gain", "min", 4.75, 1.0)], {})
    assert choice.values == {"R1": 5.6}


def test_a_bound_out_of_reach_costs_no_other_one():
    """By the smallest margin alone 5.6 would win: nearer to 100, and past the bound that 4.7 keeps."""
    bounds = [Requirement("gain", "min", 100.0, 1.0), Requirement("gain", "max", 5.0, 1.0)]
    choice = choose((Fitted("R1", 4.8, "E12"),), lambda v: {"gain": v["R1"]}, bounds, {})
    assert choice.values == {"R1": 4.7}
    assert choice.margins == pytest.approx((-0.953, 0.06))


def test_tolerance_of_the_part_itself_counts():
    fitted, bound = (Fitted("R1", 4.8, "E12"),), [Requirement("gain", "min", 4.4, 1.0)]
    assert choose(fitted, lambda v: {"gain": v["R1"]}, bound, {}).values == {"R1": 4.7}
    loose = choose(fitted, lambda v: {"gain": v["R1"]}, bound, {"R1": Tolerance(-0.1, 0.1)})
    assert loose.values == {"R1": 5.6}
    assert loose.corners == ({}, {"R1": "low"})
    assert loose.margins == pytest.approx((5.6 * 0.9 / 4.4 - 1,))


def test_equally_near_values_go_to_fewer_lines():
    """Exact values midway in ratio: 1.0 and 1.5 are equally near each, so both resistors become one line."""
    middle = 1.5**0.5
    fitted = (Fitted("R1", middle, (1.0, 1.5)), Fitted("R2", middle, (1.0, 1.5, 3.0)), Fitted("R3", 1.5, "E6"))
    assert choose(fitted, lambda v: {}, [], {}).values == {"R1": 1.0, "R2": 1.0, "R3": 1.5}
    same = tuple(Fitted(ref, middle, "E6") for ref in ("R1", "R2"))
    assert len(set(choose((*same, Fitted("R3", 1.5, "E6")), lambda v: {}, [], {}).values.values())) == 1


def test_equally_near_values_go_to_the_commoner_series():
    exact = (1.0 * 1.05) ** 0.5
    assert choose((Fitted("R1", exact, "E48"),), lambda v: {}, [], {}).values == {"R1": 1.0}
    exact = (9.53 * 10.0) ** 0.5
    assert choose((Fitted("R1", exact, "E48"),), lambda v: {}, [], {}).values == {"R1": 10.0}


def test_a_fixed_value_stays_as_it_is():
    choice = choose((Fitted("R1", 4.81, "E12", fixed=True),), lambda v: {}, [], {})
    assert choice.values == {"R1": 4.81}
    assert choice.tried == 1


def test_an_empty_window_takes_the_nearest_and_says_so():
    choice = choose((Fitted("R1", 23.5e3, "E12", low=23e3, high=24.5e3),), lambda v: {}, [], {})
    assert choice.values == {"R1": 22e3}
    assert choice.notes == ("R1: no E12 value lies in its window, 23.0 kΩ to 24.5 kΩ; 22 kΩ is the nearest",)


def test_a_drawer_without_a_fitting_value_says_so():
    choice = choose((Fitted("C1", 5e-12, (1e-12, 10e-12), low=2e-12),), lambda v: {}, [], {})
    assert choice.values == {"C1": 10e-12}
    assert choice.notes == ()
    choice = choose((Fitted("C1", 50e-12, (1e-12, 10e-12), low=20e-12),), lambda v: {}, [], {})
    assert choice.notes == ("C1: no drawer's value lies in its window, from 20.0 pF up; 10 pF is the nearest",)


@pytest.mark.parametrize("value", [0.1 + 0.2, 0.3 - 1e-16])
def test_a_window_holds_its_own_ends_in_spite_of_rounding(value):
    assert value != 0.3
    assert choose((Fitted("R1", value, "E24", low=value, high=value),), lambda v: {}, [], {}).notes == ()


OMITTABLE = Fitted("C1", 0.05e-12, "E24", low=0.0, omittable=True)


def test_a_part_that_may_be_spared_is_left_out_where_margins_allow():
    assert choose((OMITTABLE,), lambda v: {}, [], {}).values == {"C1": 0.0}
    assert choose((Fitted("C1", 0.0, "E24", omittable=True),), lambda v: {}, [], {}).values == {"C1": 0.0}


def test_a_part_that_may_be_spared_is_fitted_where_a_requirement_needs_it():
    bound = Requirement("damping", "min", 0.045e-12, 1e-15)
    choice = choose((OMITTABLE,), lambda v: {"damping": v["C1"]}, [bound], {"C1": Tolerance(-0.05, 0.05)})
    assert choice.values["C1"] == pytest.approx(0.051e-12)


def test_a_part_that_may_be_spared_but_has_a_window_above_zero_is_fitted():
    part = Fitted("C1", 1e-12, "E24", low=0.5e-12, omittable=True)
    assert choose((part,), lambda v: {}, [], {}).values == {"C1": 1e-12}


@pytest.mark.parametrize("part", [Fitted("R1", 0.0, "E24"), Fitted("R1", 1.0, "E24", low=-2.0, high=-1.0)])
def test_a_value_that_no_part_has_is_refused(part):
    with pytest.raises(ValueError, match="R1: no part has the value"):
        choose((part,), lambda v: {}, [], {})


def test_missing_and_undefined_figures_count_as_missed_by_far():
    def evaluate(v):
        return {"bandwidth": np.where(np.asarray(v["R1"]) > 5, np.nan, 1.0)}

    bound = Requirement("bandwidth", "min", 2.0, 1.0)
    choice = choose((Fitted("R1", 5.6, "E12"),), evaluate, [bound], {})
    assert choice.values == {"R1": 4.7}
    assert choice.margins == pytest.approx((-0.5,))
    absent = choose((Fitted("R1", 5.6, "E12"),), evaluate, [Requirement("peaking", "max", 1.0, 1.0)], {})
    assert absent.values == {"R1": 5.6}
    assert absent.margins[0] < -1e6


def test_a_corner_that_only_the_winner_has_is_added_and_judged():
    """At the exact value `x` does not matter; beyond it, it does."""

    def evaluate(v):
        return {"gain": v["R1"] - 10 * np.maximum(np.asarray(v["R1"]) - 4.8, 0) * np.maximum(v["x"] - 1.0, 0)}

    limits: Limits = {"x": Limit(1.0, 1.0, 2.0)}
    choice = choose((Fitted("R1", 4.8, "E12", low=4.0),), evaluate, [Requirement("gain", "min", 4.75, 1.0)], limits)
    assert {"x": "high"} in choice.corners
    assert choice.rounds == 2
    assert choice.values == {"R1": 4.7}


def test_without_requirements_nothing_is_evaluated():
    def evaluate(v):
        raise AssertionError("evaluated")

    choice = choose((Fitted("R1", 4.8, "E12"),), evaluate, [], {"R1": Tolerance(-0.01, 0.01)})
    assert choice.values == {"R1": 4.7}
    assert choice.margins == ()


def test_without_parts_the_margins_are_still_found():
    limits: Limits = {"x": Limit(1.0, 0.5, 1.5)}
    choice = choose((), lambda v: {"gain": v["x"]}, [Requirement("gain", "min", 1.0, 1.0)], limits)
    assert choice.values == {}
    assert choice.margins == pytest.approx((-0.5,))


def many_parts():
    exact = (1.07, 2.26, 3.14, 4.49, 5.87, 7.13)
    fitted = tuple(Fitted(f"R{i}", value, "E12") for i, value in enumerate(exact))
    limits: Limits = {**{part.ref: Tolerance(-0.01, 0.01) for part in fitted}, "x": Limit(1.0, 0.9, 1.1)}

    def evaluate(v):
        r = [v[f"R{i}"] for i in range(6)]
        return {"a": r[0] * r[1] / r[2] * v["x"], "b": r[3] * r[4] / (r[5] * r[0]), "c": r[1] * r[3] * r[5] / r[2]}

    nominal = evaluate({**{part.ref: part.exact for part in fitted}, "x": 1.0})
    sides = (("min", 0.5), ("max", 0.8))
    bounds = [Requirement(name, side, f * value, 1e-9) for name, value in nominal.items() for side, f in sides]
    return fitted, evaluate, bounds, limits


def test_too_many_combinations_are_searched_by_exchange_and_none_of_two_parts_betters_the_result():
    fitted, evaluate, bounds, limits = many_parts()
    choice = choose(fitted, evaluate, bounds, limits)
    assert not choice.exhaustive
    assert choice.tried < 5**6
    pools = [sorted(values("E12", 0.1, 99), key=lambda v, e=part.exact: abs(log(v / e)))[:5] for part in fitted]
    found = rank(choice.values, fitted, worst_margins(choice.values, evaluate, bounds, limits, choice.corners))
    for first, second in product(range(6), repeat=2):
        for pair in product(pools[first], pools[second]):
            changed = {**choice.values, **dict(zip((f"R{first}", f"R{second}"), pair, strict=True))}
            assert rank(changed, fitted, worst_margins(changed, evaluate, bounds, limits, choice.corners)) >= found
    nearest = {part.ref: pool[0] for part, pool in zip(fitted, pools, strict=True)}
    assert min(worst_margins(nearest, evaluate, bounds, limits, choice.corners)) < min(choice.margins) + 1e-9


def test_same_input_same_choice_whatever_the_blocks(monkeypatch):
    first = choose(*many_parts())
    monkeypatch.setattr("opto_ckt.limits.BLOCK", 17)
    assert choose(*many_parts()) == first


def test_an_open_window_is_open():
    assert choose((Fitted("R1", 4.8, "E12", high=inf),), lambda v: {}, [], {}).values == {"R1": 4.7}
