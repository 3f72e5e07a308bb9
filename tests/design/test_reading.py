from __future__ import annotations

import tomllib

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import ValidationError

from opto_ckt.design.examination import examine
from opto_ckt.parts.record import FROM_FILE, Assumed, Spread
from opto_ckt.request import LaserDriverRequest, ReceiverRequest
from opto_ckt.request.reading import Limit
from tests.design.designs import JARGON, LASER_DRIVER, RECEIVER, line_of, problems, read
from tests.near import near


def test_receiver_is_read_into_si():
    request = read(RECEIVER).request
    assert isinstance(request, ReceiverRequest)
    assert request.detector.capacitance == Spread(typ=1.5e-12, max=2e-12)
    assert request.amplifier.open_loop_gain.nominal == near(10**3.5)
    assert request.signal.extinction_ratio == near(10**0.9)
    assert request.ambient_current == Spread(min=0.0, typ=1e-6, max=1e-6)
    temperature = request.conditions.temperature
    assert (temperature.low, temperature.nominal, temperature.high) == near((253.15, 298.15, 333.15))
    assert request.conditions.board_capacitance == 0.3e-12
    assert request.require == {"bandwidth": Limit(min=8e6), "peaking": Limit(max=0.5)}
    assert request.assumed == {"gain_bandwidth": Assumed(0.4, 0.4)}
    assert request.fixed == {"R1": 22e3}
    assert request.preferred.resistors.series == (10e3, 22.1e3)
    assert request.preferred.capacitors.tolerance_below_10pF == 0.1e-12


def test_driver_is_read_into_si():
    request = read(LASER_DRIVER).request
    assert isinstance(request, LaserDriverRequest)
    assert request.transistor.kind == "nmos"
    assert request.reference.operating_current == 1e-3
    assert float(request.source.slope_at(308.15)) == near(0.3 * 0.96)
    assert request.conditions.temperature == Spread(min=273.15, typ=298.15, max=323.15)


def test_assumed_of_the_design_comes_before_that_of_the_record():
    limits = read(RECEIVER).request.limits("amplifier")
    assert limits["gain_bandwidth"][:3] == near((400e6, 240e6, 560e6))
    assert limits["voltage_noise"] == (near(7e-9), near(7e-9), near(8.75e-9), True)
    assert limits["offset_voltage"] == (near(0.25e-3), near(0.25e-3), near(1.8e-3), False)


@pytest.mark.parametrize(
    ("old", "new", "at", "told"),
    [
        ("response =", "respnse =", "respnse", ["target.respnse", "not known here", "did you mean 'response'?"]),
        ("[target]", "[tarjet]", "[tarjet]", ["tarjet", "not known here", "did you mean 'target'?"]),
        ('"400 MHz"', '"400"', "gain_bandwidth", ["amplifier.gain_bandwidth", "'400' has no unit", "MHz"]),
        ('"400 MHz"', "400e6", "gain_bandwidth", ["amplifier.gain_bandwidth", "no unit"]),
        ('"400 MHz"', '"400 MV"', "gain_bandwidth", ["amplifier.gain_bandwidth", "a figure in Hz is expected"]),
        ('"22 kΩ"', '"1M"', "R1", ["fixed.R1", "'1M'"]),
        ('"5 V"\noutput', '"5,0 V"\noutput', "reverse_bias", ["detector.reverse_bias", "decimal comma"]),
        ('max = "2 pF"', 'max = "1 pF"', "capacitance =", ["detector.capacitance.typ", "min ≤ typ ≤ max"]),
        ('"0.9 A/W"', '"-0.9 A/W"', "responsivity", ["detector.responsivity", "above zero"]),
        ('"22 kΩ"', '"-22 kΩ"', "R1", ["fixed.R1", "above zero"]),
        ('"22 kΩ"', '"22 pF"', "R1", ["fixed.R1", "a figure in Ω is expected"]),
        ("R1 =", "Q1 =", "Q1", ["fixed.Q1", "no designator"]),
        (
            'wavelength = "1310 nm"\npower',
            'wavelength = "1800 nm"\npower',
            "wavelength",
            ["signal.wavelength", "cut-off"],
        ),
        (
            'reverse_bias = "5 V"',
            'reverse_bias = "21 V"',
            "reverse_bias",
            ["detector.reverse_bias", "reverse_voltage_max"],
        ),
        ('negative = "-5 V"', 'negative = "-9 V"', "supply =", ["conditions.supply", "14.7 V", "supply_max 12.6 V"]),
        ('positive = "5 V", negative = "-5 V"', 'positive = "4 V"', "supply =", ["conditions.supply", "supply_min"]),
        ('"Valley receiver"', '"Valley\\n.end"', "title", ["title", "U+000A"]),
        ('"tia"', '"tai"', "circuit", ["circuit", "'tai' is no circuit", "did you mean 'tia'?"]),
        ('circuit = "tia"', "", None, ["circuit", "is missing; allowed are tia, laser-current"]),
        ("schema = 1", "schema = 2", "schema", ["schema", "2 is not known"]),
        (
            '"flat"',
            '"flatt"',
            "response",
            ["target.response", "allowed are flat, bessel, critical", "did you mean 'flat'?"],
        ),
        ('"flat"', "true", "response", ["target.response", "allowed are flat, bessel, critical"]),
        ("bandwidth = { min", "bandwith = { min", "bandwith", ["require.bandwith", "did you mean 'bandwidth'?"]),
        ('{ min = "8 MHz" }', '"8 MHz"', "bandwidth = ", ["require.bandwidth", "expected { min = ... }"]),
        ('{ min = "8 MHz" }', "{ }", "bandwidth = ", ["require.bandwidth", "empty table"]),
        ('{ min = "8 MHz" }', '{ typ = "8 MHz" }', "bandwidth = ", ["require.bandwidth.typ", "not known here"]),
        ('"40 %"', '"100 %"', 'gain_bandwidth = "100', ["assumed.gain_bandwidth", "100 %"]),
        ('gain_bandwidth = "400', 'gain_bandwith = "400', "gain_bandwith", ["did you mean 'gain_bandwidth'?"]),
        (
            'gain_bandwidth = "40 %',
            'gain_bandwith = "40 %',
            'gain_bandwith = "40 %',
            ["did you mean 'gain_bandwidth'?"],
        ),
        ('"22k1"', '"22 pF"', "resistors", ["preferred.resistors.series[1]", "a figure in Ω is expected"]),
        (
            '["10 kΩ", "22k1"]',
            '"E97"',
            "resistors",
            ["preferred.resistors.series", "allowed are E3,", "did you mean 'E96'?"],
        ),
        ('["10 kΩ", "22k1"]', "[]", "resistors", ["preferred.resistors.series", "list is empty"]),
        ('bit_rate = "10 Mbit/s"', "", "[signal]", ["signal", "what has to pass is missing", "bit_rate", "band"]),
        ('"9 dB"', '"0 dB"', "extinction_ratio", ["signal.extinction_ratio", "ratio above 1"]),
        (
            'dark_current = { typ = "1 nA", max = "5 nA" }',
            "",
            "[detector]",
            ["detector.dark_current", "is missing", "'1 nA'"],
        ),
        ('material = "InGaAs"', 'material = "other"', "material", ["detector.material", "needs cutoff_wavelength"]),
        ('capacitance_bias = "5 V"', "", "capacitance", ["detector.capacitance", "needs capacitance_bias beside"]),
        ('ambient = "1 µA"', 'ambient = { power = "1 µW" }', "ambient", ["signal.ambient", "wavelength is missing"]),
        ('min = "-20 °C"', 'min = "70 °C"', "temperature", ["conditions.temperature.min", "min ≤ typ ≤ max"]),
        ('"-20 °C"', '"-20 C"', "temperature", ["conditions.temperature.min", "'-20 C'"]),
        (
            'bit_rate = "10 Mbit/s"',
            "run_length = 7.5\nbit_rate = '10 Mbit/s'",
            "run_length",
            ["whole number", "got 7.5"],
        ),
        (
            'bit_rate = "10 Mbit/s"',
            "run_length = 0\nbit_rate = '10 Mbit/s'",
            "run_length",
            ["0 is too small; 1 or more"],
        ),
        ("[target]\n", "[load]\nresistance = [1]\n[target]\n", "resistance", ["load.resistance", "got a list"]),
        ("[target]\n", "load = 5\n[target]\n", "load", ["signal.load", "not known here"]),
        (
            "[target]\n",
            "[bias]\nsupply = '4 V'\n[target]\n",
            "supply = '4",
            ["bias.supply", "below the reverse bias of 5"],
        ),
        (
            "[target]\n",
            "[detector.gain]\nmin='5'\n[target]\n",
            "[detector.gain]",
            ["detector.gain", "optimum would do"],
        ),
        (
            'output = "cathode"',
            'output = "cathode"\ngain = "10"',
            "gain =",
            ["detector.gain", "states no avalanche gain"],
        ),
        ("[target]\n", "[conditions]\n[target]\n", "[conditions]", ["not valid TOML"]),
    ],
)
def test_one_mistake_is_told_at_its_line(old: str, new: str, at: str | None, told: list[str]):
    assert old in RECEIVER
    spoilt = RECEIVER.replace(old, new, 1)
    found = problems(spoilt)
    assert len(found) == 1, found
    place = "design.toml: " if at is None else f"design.toml:{line_of(spoilt, at)}: "
    if "not valid TOML" not in told:
        assert found[0].startswith(place)
    for words in told:
        assert words in found[0]
    assert not JARGON.search(found[0])


@pytest.mark.parametrize(
    ("old", "new", "told"),
    [
        ('positive = "5 V"', 'positive = "1 V"', ["conditions.supply", "below the forward voltage of the source"]),
        ('"25 mA"', '"70 mA"', ["signal.current", "above current_max 60"]),
        ('current = "25 mA"', 'power = "20 mW"', ["signal.power", "above power_max"]),
        ('current = "25 mA"', 'current = "25 mA"\nplane = "fibre"', ["signal.plane", "coupling is needed"]),
        ('current = "25 mA"', 'current = "25 mA"\npower = "1 mW"', ["in more than one way (current, power)"]),
        ('kind = "nmos"', 'kind = "nmoss"', ["transistor.kind", "npn, pnp, nmos, pmos", "did you mean 'nmos'?"]),
        ('kind = "nmos"\n', "", ["transistor.kind", "is missing; allowed are npn, pnp, nmos, pmos"]),
        ('kind = "nmos"\n', 'kind = "njf"\n', ["transistor.kind", "'njf' is not allowed"]),
        ('junction_to_ambient = "300 K/W"\n', "", ["transistor", "a thermal resistance is missing"]),
        ('characteristic_temperature = "60 K"\n', "", ["source.threshold_current", "needs characteristic_temperature"]),
        ('"-0.4 %/K"', '"-0.4 V"', ["source.slope_temperature", "in K such as '200 K' or in 1/K"]),
        ('"-0.4 %/K"', '"-200 K"', ["source.slope_temperature", "above zero"]),
        ('plane = "facet"', 'plane = "face"', ["source.plane", "did you mean 'facet'?"]),
        (
            "[reference]\n",
            "[diode]\nforward = 'x'\n[reference]\n",
            ["diode.forward", "expected a list of tables such as"],
        ),
        (
            "[reference]\n",
            "[diode]\nforward = [{current='1 mA'}]\n[reference]\n",
            ["diode.forward[0].voltage", "is missing"],
        ),
        ("[reference]\n", "[diode]\nforward = [1]\n[reference]\n", ["diode.forward[0]", "expected a table such as"]),
        ("[reference]\n", "[diode]\nforward = []\n[reference]\n", ["diode.forward", "0 given; one point is needed"]),
    ],
)
def test_mistakes_in_a_driver(old: str, new: str, told: list[str]):
    assert old in LASER_DRIVER
    found = problems(LASER_DRIVER.replace(old, new, 1))
    text = "\n".join(found)
    for words in told:
        assert words in text
    assert not JARGON.search(text)


def test_several_mistakes_are_all_told_in_the_order_of_lines():
    spoilt = (
        RECEIVER.replace('"400 MHz"', '"400 MHx"')
        .replace("response =", "respnse =")
        .replace('reverse_bias = "5 V"', 'reverse_bias = "30 V"')
        .replace('wavelength = "1310 nm"\npower', 'wavelength = "1900 nm"\npower')
        .replace('{ max = "0.5 dB" }', '{ max = "0.5" }')
    )
    found = problems(spoilt)
    starts = ("reverse_bias", "gain_bandwidth", "wavelength", "respnse", "peaking")
    assert [int(one.split(":")[1]) for one in found] == [line_of(spoilt, start) for start in starts]


def test_a_title_may_hold_signs_that_other_formats_use():
    assert read(RECEIVER.replace("Valley receiver", "=A & B <c>")).request.title == "=A & B <c>"


KEYS = st.sampled_from(["detector", "signal", "part", "power", "circuit", "kind", "min", "require", "x y", "\n"])
VALUES = st.recursive(
    st.one_of(
        st.booleans(),
        st.integers(),
        st.floats(),
        st.text(max_size=8),
        st.sampled_from(["5 V", "1 nA", "tia", "-3 dB", "E96", "optimum", "Si"]),
    ),
    lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(KEYS, inner, max_size=3)),
    max_leaves=6,
)


BASE = tomllib.loads(RECEIVER)
PLACES = [(table, key) for table, fields in BASE.items() if isinstance(fields, dict) for key in (None, *fields)]


@given(place=st.sampled_from(PLACES), value=VALUES)
def test_what_is_refused_is_told_and_what_is_told_is_refused(place: tuple[str, str | None], value: object):
    """Any value in the place of a table or of a field: reading and examining agree, in plain words."""
    name, key = place
    data = {other: fields for other, fields in BASE.items() if other != "schema"}
    data[name] = value if key is None else {**BASE[name], key: value}
    table, findings = examine(ReceiverRequest, data)
    try:
        built = ReceiverRequest.model_validate(data, context=dict(FROM_FILE))
    except ValidationError:
        assert findings
    else:
        assert not findings
        assert table == built
    for finding in findings:
        assert not JARGON.search(finding.message)
        assert finding.path[0] in (name, "signal", "conditions", "bias", "assumed")
