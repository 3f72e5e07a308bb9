from __future__ import annotations

import os
import re
import subprocess
import sys
from pathlib import Path
from xml.etree import ElementTree

import pytest

from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.derivation import Derivation
from opto_ckt.design.reading import read_text
from opto_ckt.outputs.schematic import WIDEST, draw, schematic
from opto_ckt.outputs.sheet import check_collisions, lay_out
from opto_ckt.outputs.wiring import drawing_faults
from opto_ckt.result import DesignHead, FoundPart, Result, Scene
from opto_ckt.topology import Supply, Topology
from tests.outputs.drawings import DRIVER, DRIVER_LABELS, RECEIVER, RECEIVER_LABELS

ROOT = Path(__file__).parents[2]
SVG = "{http://www.w3.org/2000/svg}"


def texts(picture: str) -> list[str]:
    return [element.text or "" for element in ElementTree.fromstring(picture).iter(f"{SVG}text")]


def run_python(script: str, surroundings: dict[str, str]) -> bytes:
    command, environment = [sys.executable, "-B", "-c", script], {**os.environ, **surroundings}
    return subprocess.run(command, cwd=ROOT, env=environment, capture_output=True, check=True).stdout


def starter_topology(name: str) -> Topology:
    circuit = load(name)
    read = read_text(circuit.starter, "starter", circuit_of=lambda one: load(one).request, circuits=CIRCUITS)
    return circuit.topology(read.request).with_blocks({})


def wide_labels(topology: Topology) -> dict[str, tuple[str, ...]]:
    """Texts as long as they come: values of four digits, part names of eleven letters."""
    labels = {e.ref: (e.ref, "24.35 kΩ" if e.chosen_from else "HB-PIN-1310") for e in topology.fitted}
    return labels | {e.node: (e.node, "-12.5 V") for e in topology if isinstance(e, Supply)}


@pytest.mark.parametrize("name", CIRCUITS)
def test_drawing_of_every_circuit_agrees_with_it_and_is_clean(name: str) -> None:
    topology = starter_topology(name)
    assert drawing_faults(topology) == []
    assert check_collisions(topology, wide_labels(topology)) == []
    shown = texts(draw(topology, wide_labels(topology)))
    assert {e.ref for e in topology.fitted} <= set(shown)


def test_same_bytes_in_every_run() -> None:
    script = (
        "from tests.outputs.drawings import DRIVER, DRIVER_LABELS\n"
        "from opto_ckt.outputs.schematic import draw\n"
        "import sys; sys.stdout.buffer.write(draw(DRIVER, DRIVER_LABELS).encode())"
    )
    runs = [run_python(script, {"PYTHONHASHSEED": seed}) for seed in ("1", "2")]
    assert runs[0] == runs[1] == draw(DRIVER, DRIVER_LABELS).encode()


def test_drawing_loads_no_plotting_library_and_writes_nothing(tmp_path: Path) -> None:
    script = (
        "from tests.outputs.drawings import RECEIVER\n"
        "from opto_ckt.outputs.schematic import draw\n"
        "import sys; draw(RECEIVER, {})\n"
        "unwanted = {'matplotlib', 'scipy', 'sympy', 'ziamath', 'schemdraw.backends.mpl'}\n"
        "print(sorted(unwanted & set(sys.modules)))"
    )
    home = {name: str(tmp_path) for name in ("HOME", "XDG_CACHE_HOME", "XDG_CONFIG_HOME", "MPLCONFIGDIR", "TMPDIR")}
    assert run_python(script, home).strip() == b"[]"
    assert os.listdir(tmp_path) == []


@pytest.mark.parametrize("text", ["a < b & c > d", "R&D <b>\"'</b>", "$\\Omega$ $x_1$", "--> ]]>", "Ω µ √ ∞ 測"])
def test_texts_are_written_as_they_are(text: str) -> None:
    picture = draw(RECEIVER, {"R1": ("R1", text)}, caption=text)
    assert texts(picture).count(text) == 2
    assert ElementTree.fromstring(picture).findtext(f"{SVG}title") == text


def test_line_breaks_and_control_characters_do_not_reach_the_picture() -> None:
    picture = draw(RECEIVER, {"R1": ("R1", "a\nb\x00\x1b[31m\ud800")})
    assert "a b\ufffd\ufffd[31m\ufffd" in texts(picture)
    picture.encode()


def test_picture_says_who_wrote_it_and_tells_nothing_else() -> None:
    picture = draw(RECEIVER, RECEIVER_LABELS)
    assert "written by opto-ckt" in picture[:1024]
    assert not re.search(r'\bid="|\bhref|url\(|<script|<style|font-family="(?!sans-serif")', picture)
    assert str(ROOT) not in picture


@pytest.mark.parametrize(
    ("topology", "labels"), [(RECEIVER, RECEIVER_LABELS), (DRIVER, DRIVER_LABELS)], ids=["receiver", "driver"]
)
def test_everything_lies_on_a_page_of_a4_width(topology: Topology, labels: dict[str, tuple[str, ...]]) -> None:
    root = ElementTree.fromstring(draw(topology, labels, caption="A title"))
    left, top, width, height = map(float, root.attrib["viewBox"].split())
    assert float(root.attrib["width"].removesuffix("pt")) <= WIDEST
    scale = float(root.attrib["width"].removesuffix("pt")) / width
    assert float(root.attrib["height"].removesuffix("pt")) == pytest.approx(scale * height, abs=0.02)
    frame = lay_out(topology, labels).frame
    assert left < frame.left * 36
    assert frame.right * 36 < left + width
    assert top < -frame.top * 36
    assert -frame.bottom * 36 < top + height
    assert all(left <= float(e.attrib["x"]) <= left + width for e in root.iter(f"{SVG}text"))
    assert all(top <= float(e.attrib["y"]) <= top + height for e in root.iter(f"{SVG}text"))


def _part(ref: str, value: float | None, unit: str, part: str = "", *, fitted: bool = True) -> FoundPart:
    return FoundPart(
        ref=ref, kind="", role="", unit=unit, exact=value, value=value, tolerance=None, absolute_tolerance=None,
        characteristic="", size="", part=part, stress={}, required_rating={}, formula="", source="", fitted=fitted,
    )  # fmt: skip


def test_schematic_shows_values_names_empty_places_rails_and_title() -> None:
    result = Result(
        head=DesignHead("Valley <receiver>", "B", "tia", "transimpedance amplifier", "", "valley"),
        topology=RECEIVER,
        requirements=(), figures=(), noise=(), heat=(), faults=(), roundings=(),
        assumed=(), cautions=(), not_checked=(),
        parts=(
            _part("R1", 24300.0, "Ω"), _part("C1", 0.0, "F", fitted=False), _part("U1", None, "", "HB-OA-400"),
            _part("D1", None, ""), _part("R9", 12345.0, "Ω"),
        ),
        derivation=Derivation(),
        scenes=(Scene("nominal", {}, {"supply.positive": 5.0, "supply.negative": -3.3}, {}),),
        noise_frequency=1e6,
        noise_band=(1e3, 1e7),
    )  # fmt: skip
    shown = texts(schematic(result))
    expected = ["24.3 kΩ", "12.345 kΩ", "not fitted", "HB-OA-400", "D1", "positive", "5 V", "-3.3 V", "bias", "OUT"]
    assert set(expected) <= set(shown)
    assert shown[-1] == "Valley <receiver>, rev B: transimpedance amplifier"
