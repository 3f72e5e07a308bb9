"""What bounds a transimpedance stage besides its swing: the supplies one by one, the op amp's output current."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.circuits.receivers.avalanche import overlit
from opto_ckt.design.sizing import settled
from opto_ckt.parts.avalanche import gain_at
from tests.circuits.sized import model, sized

BYPASS = {"C8": np.array([1e-7]), "C9": np.array([1e-7])}
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


def test_few_ones_are_brighter_at_the_same_average() -> None:
    """Average power d P_1 + (1 - d) P_0: overload and sensitivity by the one level that the noise asks for."""
    ratio = 10**0.9
    few = (("extinction_ratio", 'extinction_ratio = "9 dB"\nmark_density = 0.25'), ("", '[fixed]\nR1 = "10 kΩ"'))
    even = (("", '[fixed]\nR1 = "10 kΩ"'),)
    found = {
        name: model("tia", *changes).bench().evaluate({"R1": np.array([1e4]), "C1": np.array([1e-12])} | BYPASS)
        for name, changes in (("few", few), ("even", even))
    }
    lower = (0.25 * ratio + 0.75) / (0.5 * ratio + 0.5)
    for figure in ("overload", "sensitivity"):
        assert found["few"][figure][0] == pytest.approx(lower * found["even"][figure][0], rel=1e-12)


def test_the_best_gain_leaves_the_detector_within_its_current() -> None:
    """50 µA allowed to the gain at the upper end of the bias, in the cold, times a one and the background."""
    points = '[ { bias = "20 V", gain = "2" }, { bias = "40 V", gain = "10" }, { bias = "50 V", gain = "60" } ]'
    light = ("power  ", 'power = { typ = "0.2 µW", max = "5 µW" }')
    supply = ("", '[bias]\nsupply = "60 V"\ntolerance = "1 %"')
    ratio, currents = 10**0.9, []
    for allowed in ("50 µA", "10 mA"):
        diode = f'reverse_voltage_max = "80 V"\nphotocurrent_max = "{allowed}"\ngain_points = {points}'
        diode += '\ngain = "optimum"'
        diode += '\nbreakdown_temperature = "0.1 V/K"'
        asked = model("tia", ("reverse_voltage_max", diode), ("reverse_bias", ""), light, supply)
        request = settled(asked).request
        assert overlit(request) is None
        most = gain_at(request.detector, 1.01 * request.detector.resting_bias, 253.15)
        currents.append(most * (1.0 * 5e-6 * 2 * ratio / (ratio + 1) + 1e-6))
    assert 45e-6 < currents[0] <= 50e-6 < currents[1]
