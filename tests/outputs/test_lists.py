from __future__ import annotations

from opto_ckt.figures import FIGURES
from opto_ckt.outputs.lists import circuits_list, figures_table, parts_list
from opto_ckt.parts.opamp import OpAmpData
from tests.outputs.records import filled


def test_circuits_have_name_and_title() -> None:
    assert (
        circuits_list({"tia": "amplifier", "laser-current": "driver"})
        == "tia            amplifier\nlaser-current  driver\n"
    )


def test_the_table_of_figures_tells_unit_circuits_and_meaning() -> None:
    text = figures_table({"tia": ("bandwidth", "peaking"), "laser-current": ("bandwidth",)})
    lines = text.splitlines()
    assert len(lines) == 3
    assert lines[1].split()[:3] == ["bandwidth", "Hz", "all"]
    assert FIGURES["bandwidth"].convention in lines[1]
    assert lines[2].split()[:3] == ["peaking", "dB", "tia"]


def test_parts_show_their_figures_with_units() -> None:
    record = filled(OpAmpData)
    brief = parts_list("parts.toml", [("opamp", "HB-1", record)])
    assert brief.splitlines()[:4] == ["parts.toml", "", "opamp", "  HB-1"]
    assert "gain bandwidth 230 MHz" in brief
    full = parts_list("parts.toml", [("opamp", "HB-1", record)], verbose=True)
    assert "slew_rate" in full
    assert "290 V/µs" in full


def test_a_file_without_parts_says_so() -> None:
    assert "no parts" in parts_list("empty.toml", [])
