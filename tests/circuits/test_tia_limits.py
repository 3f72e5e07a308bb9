"""What bounds a transimpedance stage besides its swing: the supplies one by one, the op amp's output current."""

from __future__ import annotations

import numpy as np
import pytest

from tests.circuits.sized import model, sized

BY_RAILS = {"light before supplies", "negative supply before positive", "positive supply before negative"}


@pytest.mark.parametrize(
    ("changes", "cases"),
    [
        ((), BY_RAILS),
        ((("output  ", 'output = "anode"'),), BY_RAILS),
        ((("reverse_bias", 'reverse_bias = "3 V"'),), {"bias before supplies", "supplies before bias"}),
        ((("", '[bias]\nsupply = "5 V"'),), {"bias before supplies", "supplies before bias"}),
        ((("reverse_bias", 'reverse_bias = "0 V"'),), {"light before supplies"}),
    ],
    ids=["negative rail", "positive rail", "own supply", "own supply of a rail's voltage", "none"],
)
def test_faults_of_the_supplies_are_those_of_what_the_bias_comes_from(changes, cases) -> None:
    found = {fault.case for fault in sized("tia", *changes).faults}
    assert {case for case in found if " before " in case} == cases


def test_a_bias_rail_that_is_missing_leaves_the_detector_unbiased() -> None:
    """Every fault of the supplies does something: the bias goes with its rail."""
    found = model("tia")
    values = found.nominal() | {"R1": 1e4, "C1": 1e-12, "C8": 1e-7, "C9": 1e-7}
    assert found.biased(values)["detector.reverse_bias"] == pytest.approx(5.0)
    assert found.biased(values | {"supply.negative": 0.0})["detector.reverse_bias"] == pytest.approx(0.0)


def test_the_output_current_of_the_op_amp_bounds_the_light() -> None:
    """R1 and a load to ground share it: by Ohm's law at the overload."""
    changes = (("output_current_max", 'output_current_max = "3 mA"'), ("", '[load]\nresistance = "1 kΩ"'))
    result = sized("tia", *changes)
    found = model("tia", *changes)
    exact = {part.ref: np.array([part.value]) for part in result.parts if part.value}
    figures = found.bench().evaluate(exact)
    r1, light = float(exact["R1"][0]), float(figures["overload"][0])
    ratio = 10**0.9
    values = found.nominal()
    current = values["D1.responsivity"] * light * 2 * ratio / (ratio + 1)
    current = (current + values["signal.ambient"]) * (1 + float(figures["overshoot"][0]))
    volts = current * r1 + r1 * values["D1.dark_current"] + abs(values["U1.offset_voltage"])
    assert volts / r1 + volts / 1e3 == pytest.approx(3e-3, rel=2e-3)
    assert volts < 3.7
    assert any(row.requirement.figure == "overload" for row in result.requirements) is False
