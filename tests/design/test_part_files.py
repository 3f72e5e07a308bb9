from __future__ import annotations

from hashlib import sha256
from pathlib import Path

import pytest

from opto_ckt.design.reading import read_part_file
from opto_ckt.errors import InputError
from opto_ckt.parts.record import Spread
from opto_ckt.request import ReceiverRequest
from tests.design.designs import AMPLIFIER, DETECTOR, JARGON, PARTS, WITH_PARTS, line_of, problems, read, read_file
from tests.near import near


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
