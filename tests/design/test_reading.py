from __future__ import annotations

import re
import tomllib
from hashlib import sha256
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import ValidationError

from opto_ckt.design import files
from opto_ckt.design.examination import examine
from opto_ckt.design.files import LARGEST
from opto_ckt.design.reading import read_part_file
from opto_ckt.errors import InputError
from opto_ckt.parts.record import FROM_FILE, Assumed, Spread
from opto_ckt.request import LaserDriverRequest, ReceiverRequest
from opto_ckt.request.reading import Limit
from tests.design.designs import (
    AMPLIFIER,
    DETECTOR,
    LASER_DRIVER,
    PARTS,
    RECEIVER,
    WITH_PARTS,
    line_of,
    problems,
    read,
    read_file,
)
from tests.near import near

JARGON = re.compile(
    r"Input should|Field required|Extra inputs|validation error|pydantic|type=|Value error|NoneType|dict\b"
)


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
            ["diode.forward", "expected a list of a table such as"],
        ),
        (
            "[reference]\n",
            "[diode]\nforward = [{current='1 mA'}]\n[reference]\n",
            ["diode.forward[0].voltage", "is missing"],
        ),
        ("[reference]\n", "[diode]\nforward = [1]\n[reference]\n", ["diode.forward[0]", "expected a table such as"]),
        ("[reference]\n", "[diode]\nforward = []\n[reference]\n", ["diode.forward", "1 points are needed"]),
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


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "parts.toml").write_text(PARTS)
    (tmp_path / "tia.toml").write_text(WITH_PARTS)
    return tmp_path


def test_parts_come_from_part_files(folder: Path):
    design = read_file(folder / "tia.toml")
    request = design.request
    assert isinstance(request, ReceiverRequest)
    assert request.detector.part == "HB-PIN-55"
    assert request.detector.reverse_bias == 5.0
    assert request.signal.power.nominal == near(10e-6)
    assert design.stem == "tia"
    assert design.catalogue.names("opamp") == ("HB-OA-400",)
    content = (folder / "tia.toml").read_bytes() + (folder / "parts.toml").read_bytes()
    assert design.digest == f"sha256:{sha256(content).hexdigest()}"


def test_a_stream_finds_its_parts_in_the_folder_that_is_told(folder: Path):
    assert read(WITH_PARTS, "-", str(folder)).request == read_file(folder / "tia.toml").request
    assert read(WITH_PARTS, "-", str(folder)).stem == "design"


def test_fields_beside_part_come_first(folder: Path):
    text = WITH_PARTS.replace('reverse_bias = "5 V"', 'dark_current = "7 nA"\nzero_bias_capacitance = "9 pF"')
    detector = read(text, folder=str(folder)).request.detector  # type: ignore[attr-defined]  # a ReceiverRequest
    assert detector.dark_current == Spread(typ=7e-9)
    assert detector.capacitance is None
    assert detector.capacitance_figure == Spread(typ=9e-12)


def test_another_part_may_be_fitted(folder: Path):
    more = f'[opamp."HB-OA-2"]\n{AMPLIFIER.replace("400 MHz", "2 GHz")}'
    (folder / "parts.toml").write_text(PARTS + more)
    request = read(WITH_PARTS, folder=str(folder), amplifier="HB-OA-2").request
    assert isinstance(request, ReceiverRequest)
    assert (request.amplifier.part, request.amplifier.gain_bandwidth.nominal) == ("HB-OA-2", 2e9)


def test_unknown_part(folder: Path):
    found = problems(WITH_PARTS.replace('"HB-PIN-55"', '"HB-PIN-5"'), str(folder))
    assert found == [
        "design.toml:5: detector.part: 'HB-PIN-5' is in no part file; under photodiode there are HB-PIN-55;"
        " did you mean 'HB-PIN-55'?"
    ]


def test_mistake_in_a_part_is_told_in_the_part_file(folder: Path):
    spoilt = PARTS.replace('"0.9 A/W"', '"0.9 V"').replace('material = "InGaAs"\n', "")
    (folder / "parts.toml").write_text(spoilt)
    material, responsivity = problems(WITH_PARTS, str(folder))
    assert material.startswith(f"{folder}/parts.toml:1: photodiode.HB-PIN-55.material: is missing")
    line = line_of(spoilt, "responsivity")
    assert responsivity.startswith(f"{folder}/parts.toml:{line}: photodiode.HB-PIN-55.responsivity: '0.9 V'")


def test_part_file_that_includes_itself(folder: Path):
    (folder / "parts.toml").write_text('parts = ["more.toml"]\n' + PARTS)
    (folder / "more.toml").write_text('parts = ["parts.toml"]\n')
    (found,) = problems(WITH_PARTS, str(folder))
    parts, more = folder / "parts.toml", folder / "more.toml"
    assert found == (
        f"{more}:1: parts[0]: part files include each other in a circle: design.toml -> {parts} -> {more} -> {parts}"
    )


def test_a_part_file_reached_twice_is_read_once(folder: Path):
    (folder / "more.toml").write_text('parts = ["parts.toml"]\n')
    text = WITH_PARTS.replace('["parts.toml"]', '["parts.toml", "more.toml", "./parts.toml"]')
    assert len(read(text, folder=str(folder)).catalogue.sources) == 2


def test_part_that_is_there_twice(folder: Path):
    (folder / "more.toml").write_text(f"# more\n[photodiode.HB-PIN-55]\n{DETECTOR}")
    (found,) = problems(WITH_PARTS.replace('["parts.toml"]', '["parts.toml", "more.toml"]'), str(folder))
    assert found.startswith(f"{folder}/more.toml:2: photodiode.HB-PIN-55: is there twice, at {folder}/parts.toml:1 too")


@pytest.mark.parametrize(
    ("content", "told"),
    [
        ("[fotodiode.X]\n", ":1: fotodiode: is no section of a part file"),
        ("[photodiode]\nmaterial = 'Si'\n", ":2: photodiode.material: belongs into a table"),
        ("photodiode = 3\n", ":1: photodiode: expected tables"),
        ('[photodiode."a\\tb"]\n' + DETECTOR, ':1: photodiode."a?b": the name holds the control character U+0009'),
        ('[photodiode.""]\n' + DETECTOR, ':1: photodiode."": the name of a part is empty'),
        ("[photodiode.X]\npart = 'Y'\n" + DETECTOR, ":2: photodiode.X.part: is for design files"),
        ("parts = 'x.toml'\n", ":1: parts: expected a list of part files"),
        ("parts = [3]\n", ":1: parts[0]: expected a text"),
        ("parts = ['gone.toml']\n", "gone.toml there is no such file"),
        ("[transistor.X]\nkind = 'npm'\n", ":2: transistor.X.kind: 'npm' is not allowed; allowed are npn"),
        ("[transistor.X]\n", ":1: transistor.X.kind: is missing"),
        ("[opamp.X]\n", ":1: opamp.X.gain_bandwidth: is missing; expected a figure such as '230 MHz'"),
        (
            '[reference.X]\nvoltage = "1 V"\ntolerance = "1 %"\ndescription = "a\\u0000b"\n',
            ":4: reference.X.description: holds the control character U+0000",
        ),
        (
            '[reference.X]\nvoltage = "1 V"\ntolerance = "1 %"\ndocument = 1\n',
            ":4: reference.X.document: expected a text",
        ),
    ],
)
def test_mistakes_of_part_files(tmp_path: Path, content: str, told: str):
    path = tmp_path / "parts.toml"
    path.write_text(content)
    with pytest.raises(InputError) as caught:
        read_part_file(str(path))
    assert told in str(caught.value)
    assert not JARGON.search(str(caught.value))


def test_part_file_is_read_whole(folder: Path):
    parts = read_part_file(str(folder / "parts.toml"))
    assert [(section, name) for section, name, _ in parts] == [("photodiode", "HB-PIN-55"), ("opamp", "HB-OA-400")]
    assert all(record.part == name for _, name, record in parts)


@pytest.mark.parametrize(
    ("content", "told"),
    [
        (b"", "is empty"),
        (b" \n\n", "is empty"),
        (b"\xef\xbb\xbfcircuit = 'tia'\n", "design.toml:1: begins with a byte-order mark"),
        (b"title = 'x'\n\xff\n", "design.toml:2: is not UTF-8 text"),
        (b"a = 1\nb = = 2\n", "design.toml:2: is not valid TOML: "),
        (b"a = [1,\n", "design.toml: is not valid TOML: "),
        (b"a = 1\na = 2\n", "design.toml:2: is not valid TOML: cannot overwrite a value"),
        (b"a = " + b"9" * 5000 + b"\n", "is not valid TOML"),
        (b"a = " + b"[" * 9000 + b"]" * 9000 + b"\n", "is nested too deep"),
        (b"#" * 10_000_000, f"larger than {LARGEST // 1000} kB"),
        (b"a = 1\x00\n", "design.toml:1: is not valid TOML"),
    ],
    ids=["empty", "blank", "mark", "bytes", "syntax", "open", "double", "number", "deep", "large", "zero"],
)
def test_file_that_is_no_design(tmp_path: Path, content: bytes, told: str, monkeypatch: pytest.MonkeyPatch):
    monkeypatch.chdir(tmp_path)
    Path("design.toml").write_bytes(content)
    with pytest.raises(InputError) as caught:
        read_file(Path("design.toml"))
    assert str(caught.value).startswith("design.toml")
    assert told in str(caught.value)


def test_directory_and_missing_file(tmp_path: Path):
    with pytest.raises(InputError, match="is a directory"):
        read_file(tmp_path)
    with pytest.raises(InputError, match="there is no such file"):
        read_file(tmp_path / "gone.toml")


def test_file_without_permission(tmp_path: Path, monkeypatch: pytest.MonkeyPatch):
    def refuse(path: str, mode: str) -> None:
        raise PermissionError(13, "Permission denied", path)

    monkeypatch.setattr(files, "open", refuse, raising=False)
    with pytest.raises(InputError, match="no permission"):
        read_file(tmp_path / "tia.toml")


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
    table, key = place
    data = {name: fields for name, fields in BASE.items() if name != "schema"}
    data[table] = value if key is None else {**BASE[table], key: value}
    findings = examine(ReceiverRequest, data).findings
    try:
        ReceiverRequest.model_validate(data, context=dict(FROM_FILE))
    except ValidationError:
        assert findings
    else:
        assert not findings
    for finding in findings:
        assert not JARGON.search(finding.message)
        assert finding.path[0] in (table, "signal", "conditions", "bias", "assumed")
