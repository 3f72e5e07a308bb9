from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from opto_ckt.analyses.ideal import idealised, left_out
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import coefficients, symbolic_transfer
from tests.outputs.results import topology

VALUES = {
    "R1": 24e3, "C1": 0.4e-12, "D1.responsivity": 0.9, "D1.capacitance": 9e-12, "U1.gain_bandwidth": 400e6,
    "U1.open_loop_gain": 1e4, "U1.common_capacitance": 1.5e-12, "U1.differential_capacitance": 0.7e-12,
}  # fmt: skip
FREQUENCIES = np.array([1e3, 1e6, 1e7, 5e7])


def test_values_at_their_limits_are_named() -> None:
    none, unbounded = left_out(topology())
    assert {"CB", "D1.series_resistance", "U1.output_resistance"} <= set(none)
    assert {"U1.second_pole", "D1.transit_frequency", "D1.shunt_resistance"} <= set(unbounded)


def test_the_ideal_network_answers_like_the_whole_one_near_the_limits() -> None:
    none, unbounded = left_out(topology())
    whole = expand(topology())
    ideal = idealised(whole, none, unbounded).expansion
    assert len(ideal.primitives) < len(whole.primitives)
    near = {**dict.fromkeys(none, 1e-21), **dict.fromkeys(unbounded, 1e15)}
    near |= {name: 1e-3 for name in none if name.endswith("resistance")}
    noise = {name: 1e-12 for name in Network(whole).inputs if name not in VALUES and name not in near}
    expected = transfer_at(Network(whole).evaluate({**VALUES, **near, **noise}), FREQUENCIES)
    found = transfer_at(Network(ideal).evaluate(VALUES), FREQUENCIES)
    assert found == pytest.approx(expected, rel=1e-4)


def test_the_coefficients_are_those_of_the_network() -> None:
    ideal = idealised(expand(topology()), *left_out(topology())).expansion
    above, below = coefficients(symbolic_transfer(ideal))
    point = 2j * np.pi * FREQUENCIES
    numerator, denominator = ([_number(factor) for factor in reversed(part)] for part in (above, below))
    found = np.polyval(numerator, point) / np.polyval(denominator, point)
    assert found == pytest.approx(transfer_at(Network(ideal).evaluate(VALUES), FREQUENCIES), rel=1e-9)


def _number(factor: Any) -> float:
    return float(factor.subs({symbol: VALUES[symbol.name] for symbol in factor.free_symbols}))
