from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from opto_ckt.analyses.ideal import READABLE, answers, core, frequencies_of, simplified
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import bandwidth, transfer_at
from opto_ckt.analyses.stability import crossover_frequency, return_ratio_at
from opto_ckt.analyses.symbolic import coefficients, symbolic_transfer, value_of
from tests.outputs.results import VALUES, topology

EXPANSION = expand(topology())
FREQUENCIES = frequencies_of(EXPANSION, VALUES)


def test_frequencies_reach_the_crossover_where_it_lies_above_the_bandwidth() -> None:
    evaluation = Network(EXPANSION).evaluate(VALUES)
    assert FREQUENCIES[-1] == pytest.approx(max(bandwidth(evaluation)[0], crossover_frequency(evaluation)[0]))


def test_the_answers_are_those_of_the_engine() -> None:
    transfer, closed = answers(EXPANSION, VALUES, FREQUENCIES)
    evaluation = Network(EXPANSION).evaluate(VALUES)
    expected = np.array([transfer_at(evaluation, frequency)[0] for frequency in FREQUENCIES])
    ratio = np.array([return_ratio_at(evaluation, frequency)[0] for frequency in FREQUENCIES])
    assert transfer == pytest.approx(expected, rel=1e-9)
    assert closed == pytest.approx(ratio / (1 + ratio), rel=1e-7)


@pytest.mark.parametrize("tolerance", [0.0, 0.01, 0.1])
def test_what_is_left_out_changes_no_answer_by_more_than_the_tolerance(tolerance: float) -> None:
    found = simplified(EXPANSION, VALUES, FREQUENCIES, tolerance)
    exact, near = (answers(each, VALUES, FREQUENCIES) for each in (EXPANSION, found.expansion))
    largest = max(np.max(np.abs(near[0] - exact[0])) / np.max(np.abs(exact[0])), np.max(np.abs(near[1] - exact[1])))
    assert largest == pytest.approx(found.error, abs=1e-12)
    assert largest <= tolerance + 1e-9


def test_the_larger_the_tolerance_the_less_is_left() -> None:
    sizes = [len(simplified(EXPANSION, VALUES, FREQUENCIES, each).expansion.primitives) for each in (0.001, 0.02, 0.2)]
    assert sizes == sorted(sizes, reverse=True)
    assert sizes[0] > sizes[-1]


def test_strays_and_poles_that_do_not_matter_go_and_what_decides_stays() -> None:
    found = core(EXPANSION, VALUES, FREQUENCIES)
    kept = {each.name for each in found.expansion.primitives}
    assert len(kept) <= READABLE
    assert {"R1", "C1", "D1.capacitance", "U1.dominant"} <= kept
    assert "D1.transit_c" in found.opened
    assert "D1.series_resistance" in found.shorted


def test_source_and_output_are_never_shorted() -> None:
    bare = replace(EXPANSION, primitives=tuple(each for each in EXPANSION.primitives if each.name != "C1"))
    found = simplified(bare, VALUES, FREQUENCIES, 0.5)
    assert found.expansion.output == EXPANSION.output
    assert found.expansion.input[0] != found.expansion.input[1]


def test_the_coefficients_are_those_of_the_network() -> None:
    heart = core(EXPANSION, VALUES, FREQUENCIES).expansion
    above, below = coefficients(symbolic_transfer(heart))
    point = 2j * np.pi * FREQUENCIES
    numerator, denominator = ([value_of(factor, VALUES) for factor in reversed(part)] for part in (above, below))
    found = np.polyval(numerator, point) / np.polyval(denominator, point)
    assert found == pytest.approx(answers(heart, VALUES, FREQUENCIES)[0], rel=1e-9)


def test_dropping_small_terms_keeps_the_large_ones() -> None:
    heart = core(EXPANSION, VALUES, FREQUENCIES).expansion
    exact, short = coefficients(symbolic_transfer(heart)), coefficients(symbolic_transfer(heart), VALUES, 0.2)
    for whole, dropped in zip((*exact[0], *exact[1]), (*short[0], *short[1]), strict=True):
        assert value_of(dropped, VALUES) == pytest.approx(value_of(whole, VALUES), rel=0.2)
        assert len(str(dropped)) <= len(str(whole))
