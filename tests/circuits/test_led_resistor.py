"""LED behind a resistor: its current by hand and in print, its speed, its faults, what is refused."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.circuits.drivers.led import lit, nominal
from opto_ckt.circuits.drivers.root import falling_root
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.formulas.diode import current_at_voltage, forward_voltage
from opto_ckt.limits import Lanes
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.wiring import drawing_faults
from opto_ckt.result import Result
from tests.circuits.sized import model, read, sized
from tests.near import near
from tests.published.printed import printed

NAME = "led-resistor"
SOURCE = (("drive ", 'drive = "source"'),)
"""Lit while the output is high."""

RAIL = (
    (r"\[logic_output\]", ""),
    ("high ", ""),
    ("low ", ""),
    ("source_resistance", ""),
    ("sink_resistance", ""),
    ("current_max       =", ""),
)
"""Between rail and ground."""

FEEDS = ((), SOURCE, RAIL)


def part(result: Result, ref: str) -> float:
    value = next(part.exact for part in result.parts if part.ref == ref)
    assert value is not None
    return value


def figure(result: Result, name: str) -> tuple[float, float, float]:
    found = next(figure for figure in result.figures if figure.name == name)
    return found.low, found.nominal, found.high


@pytest.mark.parametrize("changes", FEEDS)
def test_voltages_add_up_in_every_scene(changes: tuple[tuple[str, str], ...]) -> None:
    for scene in sized(NAME, *changes).scenes:
        v = scene.values
        taken = v["D1.current"] * (v["R1"] + v.get("U1.resistance", 0.0)) + v["D1.forward_voltage"]
        assert taken == near(v["set_voltage"], rel=1e-9)


@pytest.mark.parametrize("changes", FEEDS)
def test_decks_agree_at_nominal_and_two_corners(changes: tuple[tuple[str, str], ...]) -> None:
    rows = crosscheck(sized(NAME, *changes), "ngspice")
    assert len({row.scene for row in rows}) == 3
    assert not [row for row in rows if not row.ok]


@pytest.mark.parametrize("changes", FEEDS)
def test_the_drawing_joins_what_the_topology_joins(changes: tuple[tuple[str, str], ...]) -> None:
    topology = model(NAME, *changes).topology
    assert drawing_faults(topology) == []


def _by_the_sheet(current: str) -> Result:
    """An LED with the forward voltages of one page, on 5 V without a tolerance, its current to be found."""
    changes = (
        *RAIL,
        (r"    \{ current = \"5 mA\", voltage", '    { current = "15 mA", voltage = "1.50 V" },'),
        (r"    \{ current = \"20 mA\", voltage", '    { current = "30 mA", voltage = "1.55 V" },'),
        (r"    \{ current = \"60 mA\", voltage", '    { current = "48 mA", voltage = "1.62 V" },'),
        ("forward_voltage_temperature", ""),
        ("current = ", f'current = "{current}"'),
        ("supply  ", 'supply = { positive = "5 V", tolerance = "0 %" }'),
        ("optical_power ", ""),
    )
    return sized(NAME, *changes)


@pytest.mark.parametrize(("current", "resistance"), [("15 mA", "233"), ("30 mA", "115"), ("48 mA", "70.4")])
def test_hfbr_1402(current: str, resistance: str) -> None:
    """Hewlett-Packard, HFBR-1402C data sheet p. 11: 1.50, 1.55 and 1.62 V, each at its own current."""
    assert part(_by_the_sheet(current), "R1") == printed(resistance)


def test_sedha_13_7() -> None:
    """R. S. Sedha, A Textbook of Applied Electronics, Ex. 13.7 (p. 270): 387.5 Ω by the least voltage, 390 Ω fitted."""
    result = sized(
        NAME,
        *RAIL,
        (r"    \{ current = \"5 mA\", voltage", '    { current = "16 mA", voltage = { min = "1.8 V", max = "2 V" } },'),
        (r"    \{ current = \"20 mA\", voltage", ""),
        (r"    \{ current = \"60 mA\", voltage", ""),
        ("forward_voltage_temperature", ""),
        ("current = ", 'current = { typ = "16 mA", max = "16 mA" }'),
        ("supply  ", 'supply = { positive = "8 V", tolerance = "0 %" }'),
        (r"# \[preferred\]", "[preferred]"),
        ("# resistors", 'resistors = { series = "E24", tolerance = "0 %", temperature_coefficient = "0 ppm/K" }'),
        ("optical_power ", ""),
        (r"bandwidth ", ""),
    )
    step = result.derivation.of("least R1")
    assert step is not None
    assert step.result == printed("387.5")
    assert next(part.value for part in result.parts if part.ref == "R1") == 390.0


def test_the_two_bandwidths_are_a_root_of_three_apart() -> None:
    """One pole, that of the lifetime: 4 ns; the junction's capacitance out of the way."""
    result = sized(NAME, ("capacitance ", 'capacitance = "0.01 pF"'), ("lifetime ", 'lifetime = "4 ns"'))
    _, electrical, _ = figure(result, "bandwidth")
    _, optical, _ = figure(result, "optical_bandwidth")
    assert electrical == near(1 / (2 * np.pi * 4e-9), rel=1e-3)
    assert optical / electrical == near(3**0.5, rel=1e-3)
    assert figure(result, "rise_time")[1] == near(np.log(9) * 4e-9, rel=1e-3)


def test_a_rise_time_stands_for_the_lifetime() -> None:
    result = sized(NAME, ("lifetime ", 'optical_rise_time = "8.789 ns"'), ("capacitance ", 'capacitance = "0.01 pF"'))
    assert figure(result, "rise_time")[1] == near(8.789e-9, rel=1e-3)


def test_junction_and_heat_agree_with_plain_iteration() -> None:
    request = read(NAME).request
    values = nominal(request, 333.15)
    found = lit(values, request, np.array([30e-3]))
    junction = 333.15
    for _ in range(200):
        voltage = float(request.source.forward_voltage_at(30e-3, junction))
        junction = 333.15 + 260.0 * 30e-3 * voltage  # light in the fibre alone is known: all counts as heat
    assert found["D1.junction_temperature"] == near(junction, rel=1e-6)
    assert found["D1.heat"] == near(30e-3 * voltage, rel=1e-6)


def test_the_largest_current_stays_below_its_limit_at_the_worst_corner() -> None:
    """A current asked for near its limit is given up for the limit."""
    result = sized(NAME, ("current = ", 'current = { typ = "32 mA", max = "33 mA" }'))
    assert figure(result, "current")[2] <= 33e-3
    assert figure(result, "current")[1] < 32e-3


def test_faults_say_what_limits_the_current() -> None:
    faults = {fault.case: fault for fault in sized(NAME).faults}
    assert not faults["series resistor short"].ok
    assert "above current_max of the LED" in faults["series resistor short"].result
    assert faults["control stuck dark"].result == "no current through the LED"
    assert faults["load short"].ok


def test_a_supply_below_the_forward_voltage_is_refused() -> None:
    with pytest.raises(InputError, match=r"below the forward voltage of the LED, 1\.5"):
        read(NAME, *RAIL, ("supply  ", 'supply = { positive = "1.5 V" }'))


def test_a_plane_without_a_known_coupling_is_refused() -> None:
    with pytest.raises(InputError, match="states its power at the fibre; at the facet it is unknown"):
        read(NAME, ("drive ", 'drive = "sink"\nplane = "facet"'))


def test_an_output_that_takes_all_the_voltage_is_infeasible() -> None:
    with pytest.raises(InfeasibleError, match="leaves nothing for a resistor"):
        sized(NAME, ("sink_resistance", 'sink_resistance = "300 Ω"'))


def test_power_finds_its_current() -> None:
    """12 µW at 20 mA by the sheet, its junction at 25 °C."""
    cold = ("temperature = ", 'temperature = { min = "-10 °C", typ = "15.6 °C", max = "60 °C" }')
    result = sized(NAME, ("current = ", 'power = "12 µW"'), ("optical_power ", ""), cold)
    step = result.derivation.of("R1")
    assert step is not None
    assert step.inputs["current"] == near(20e-3, rel=0.01)


def test_the_root_of_a_falling_function_agrees_with_another_road() -> None:
    """Junctions of many kinds behind many resistors, beside the exact inverse by Lambert's function."""
    rng = np.random.default_rng(1)
    voltage, resistance = rng.uniform(1, 12, 500), 10 ** rng.uniform(0, 4, 500)
    law = {"saturation_current": 10 ** rng.uniform(-20, -9, 500), "emission": rng.uniform(1, 2.5, 500)}

    def left(current: Lanes) -> Lanes:
        junction = forward_voltage(current=current, series_resistance=0.0, temperature=298.15, **law)
        return np.asarray(voltage - current * resistance - junction)

    found = falling_root(left, np.zeros(500), voltage / resistance)
    exact = current_at_voltage(voltage=voltage, series_resistance=resistance, temperature=298.15, **law)
    lit = exact > 1e-6 * voltage / resistance
    assert lit.mean() > 0.9
    np.testing.assert_allclose(found[lit], np.asarray(exact)[lit], rtol=1e-6)
