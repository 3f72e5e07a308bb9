"""Every command run as a process: exit code, streams, what it prints."""

from __future__ import annotations

import csv
import io
import json
import re
import tomllib
from pathlib import Path

import pytest

from opto_ckt import __version__
from opto_ckt.circuits import CIRCUITS
from opto_ckt.cli.main import COMMANDS
from tests.cli.process import ROOT, TIA, run


def design(**changes: str) -> str:
    """The worked receiver with lines exchanged: key to the rest of its line."""
    lines = Path(TIA).read_text().replace('"parts.toml"', json.dumps(str(ROOT / "designs" / "parts.toml"))).splitlines()
    for key, rest in changes.items():
        (place,) = (number for number, line in enumerate(lines) if line.split("=")[0].strip() == key)
        lines[place] = f"{key} = {rest}"
    return "\n".join(lines) + "\n"


def test_met_requirements_end_in_0_and_the_page_is_the_output() -> None:
    ended = run("size", TIA)
    assert ended.returncode == 0
    assert ended.stderr == b""
    assert ended.stdout.decode().splitlines()[0].startswith("Valley receiver, rev A, tia")


def test_a_missed_requirement_ends_in_1_with_all_values() -> None:
    ended = run("size", "-", stdin=design(bandwidth='{ min = "80 MHz" }'))
    text = ended.stdout.decode()
    assert ended.returncode == 1
    assert "missed" in text.splitlines()[0]
    assert "would do:" in text
    assert "R1" in text


@pytest.mark.parametrize(
    "arguments",
    [
        ("size",),
        ("siez", "x"),
        ("size", "--colour", "x"),
        ("bom",),
        ("start", "teapot"),
        ("--verbos",),
        ("size", "a", "b"),
    ],
)
def test_wrong_usage_ends_in_2_and_says_so_on_standard_error(arguments: tuple[str, ...]) -> None:
    ended = run(*arguments)
    assert ended.returncode == 2
    assert ended.stdout == b""
    assert b"Usage: opto-ckt" in ended.stderr
    assert b"Traceback" not in ended.stderr


def test_the_command_that_was_meant_is_suggested() -> None:
    assert b"did you mean 'size'?" in run("siez", TIA).stderr
    assert b"did you mean 'laser-current'?" in run("formula", "laser-curent").stderr


def test_a_bad_design_ends_in_3_with_every_problem_at_its_line() -> None:
    text = design(wavelength='"1310"\nwavelenght = "1 nm"', bandwidth='{ min = "8 MHz" }\nlink_loss = { min = "1 dB" }')
    ended = run("size", "-", stdin=text)
    said = ended.stderr.decode()
    lines = text.splitlines()
    assert ended.returncode == 3
    assert ended.stdout == b""
    for key, reason in (("wavelength", "has no unit"), ("wavelenght", "wavelength"), ("link_loss", "no figure")):
        line = next(number for number, each in enumerate(lines, 1) if each.startswith(f"{key} ="))
        (told,) = (each for each in said.splitlines() if each.startswith(f"stdin:{line}: "))
        assert reason in told
    assert "Traceback" not in said


@pytest.mark.parametrize(
    ("text", "said"), [(design(circuit='"tea"'), ", ".join(CIRCUITS)), ("", "stdin: is empty"), ("a = [", "TOML")]
)
def test_what_is_no_design_ends_in_3(text: str, said: str) -> None:
    ended = run("size", "-", stdin=text)
    assert ended.returncode == 3
    assert ended.stdout == b""
    assert said in ended.stderr.decode()


def test_a_figure_that_the_circuit_does_not_offer_ends_in_3() -> None:
    ended = run("size", "-", stdin=design(bandwidth='{ min = "8 MHz" }\nharmonic_3 = { max = "-40 dB" }'))
    assert ended.returncode == 3
    assert "tia has no harmonic_3" in ended.stderr.decode()


def test_a_file_that_is_not_there_ends_in_3() -> None:
    ended = run("size", "nowhere.toml")
    assert ended.returncode == 3
    assert ended.stderr == b"nowhere.toml: there is no such file\n"


def test_a_circuit_without_values_ends_in_4_and_names_what_would_do() -> None:
    ended = run("size", "-", stdin=design(leakage_resistance='"10 GΩ"\ninput_level = "3.5 V"'))
    first, second, *ways = ended.stderr.decode().splitlines()
    assert ended.returncode == 4
    assert ended.stdout == b""
    assert first.startswith("No values exist: the output has no headroom")
    assert second == "Any one of these would do:"
    assert any("conditions.supply" in way for way in ways)


def test_standard_input_and_a_file_give_the_same() -> None:
    by_file = json.loads(run("size", TIA, "--json").stdout)
    by_stream = json.loads(run("size", "-", "--json", stdin=design()).stdout)
    assert by_file["parts"] == by_stream["parts"]


def test_the_same_input_gives_the_same_bytes() -> None:
    assert run("size", TIA, "-v").stdout == run("size", TIA, "-v", env={"PYTHONHASHSEED": "7", "COLUMNS": "40"}).stdout


def test_json_is_json_alone() -> None:
    ended = run("size", TIA, "--json")
    read = json.loads(ended.stdout)
    assert (ended.returncode, read["verdict"], read["schema"]) == (0, "met", 1)
    assert read["design"]["circuit"] == "tia"


def test_bom_as_csv_counts_boards_and_names_designs() -> None:
    ended = run(
        "bom", TIA, "-", "--boards", "3", "--csv", "--separator", ";", "--bom-mark", stdin=design(revision='"B"')
    )
    text = ended.stdout.decode("utf-8-sig")
    assert ended.stdout.startswith(b"\xef\xbb\xbf")
    found = list(csv.DictReader(io.StringIO(text), delimiter=";"))
    assert all(int(row["Quantity"]) % 6 == 0 for row in found)
    assert all(row["References"].startswith("tia ") and "; stdin " in row["References"] for row in found)


def test_bom_refuses_to_read_standard_input_twice_and_no_boards() -> None:
    assert run("bom", "-", "-").returncode == 2
    assert run("bom", TIA, "--boards", "0").returncode == 2


def test_schematic_is_svg() -> None:
    ended = run("schematic", TIA)
    assert ended.returncode == 0
    assert b"<svg" in ended.stdout[:300]


def test_netlist_prints_every_deck_or_one() -> None:
    every = run("netlist", TIA).stdout.decode()
    one = run("netlist", TIA, "--analysis", "noise").stdout.decode()
    assert one in every
    assert one.splitlines()[-1] == ".end"
    assert every.count("\n.end\n") > one.count("\n.end\n") == 1


def test_a_missed_requirement_is_told_beside_every_output() -> None:
    text = design(bandwidth='{ min = "80 MHz" }')
    ended = run("bom", "-", stdin=text)
    assert ended.returncode == 1
    assert re.fullmatch(r"stdin: \d of \d requirements? missed; opto-ckt size tells which\n", ended.stderr.decode())


def test_formula_prints_the_model_and_the_relations() -> None:
    ended = run("formula", "tia")
    assert ended.returncode == 0
    assert ended.stderr == b""
    assert "H(s) ≈ " in ended.stdout.decode()
    assert "source: " in ended.stdout.decode()
    assert r"\frac" in run("formula", "tia", "--latex").stdout.decode()


def test_circuits_are_listed_with_their_figures() -> None:
    brief, full = run("circuits").stdout.decode(), run("circuits", "-v").stdout.decode()
    assert [line.split()[0] for line in brief.splitlines()] == list(CIRCUITS)
    assert full.startswith(brief)
    assert "-3 dB electrical" in full


def test_parts_are_listed() -> None:
    ended = run("parts", str(ROOT / "designs" / "parts.toml"))
    assert ended.returncode == 0
    assert "HB-PIN-55" in ended.stdout.decode()
    assert run("parts", "nowhere.toml").returncode == 3


@pytest.mark.parametrize("circuit", CIRCUITS)
def test_a_started_design_can_be_sized_as_it_stands(circuit: str) -> None:
    text = run("start", circuit).stdout
    ended = run("size", "-", stdin=text)
    assert ended.returncode == 0, ended.stderr.decode() + ended.stdout.decode()[:400]


def test_a_started_record_tells_what_is_still_to_be_filled_in(tmp_path: Path) -> None:
    (tmp_path / "parts.toml").write_bytes(run("start", "opamp").stdout)
    assert "opamp" in tomllib.loads((tmp_path / "parts.toml").read_text())
    ended = run("parts", "parts.toml", folder=tmp_path)
    assert ended.returncode == 3
    assert "gain_bandwidth: '' is empty" in ended.stderr.decode()


def test_files_are_written_from_the_stem_and_said_on_standard_error(tmp_path: Path) -> None:
    ended = run("size", TIA, "--out", "out", folder=tmp_path)
    names = {path.name for path in (tmp_path / "out").iterdir()}
    assert ended.returncode == 0
    assert {"tia.json", "tia.bom.txt", "tia.bom.csv", "tia.svg"} <= names
    assert any(name.endswith(".cir") for name in names)
    assert all(name.startswith("tia.") for name in names)
    assert all(name in ended.stderr.decode() for name in names)
    assert json.loads((tmp_path / "out" / "tia.json").read_text())["verdict"] == "met"
    before = {name: (tmp_path / "out" / name).read_bytes() for name in names}
    quiet = run("size", TIA, "--out", "out", "-q", folder=tmp_path)
    assert quiet.stderr == b""
    assert {name: (tmp_path / "out" / name).read_bytes() for name in names} == before


def test_a_foreign_file_is_not_overwritten_without_force(tmp_path: Path) -> None:
    (tmp_path / "tia.svg").write_text("mine")
    ended = run("schematic", TIA, "--out", ".", folder=tmp_path)
    assert ended.returncode == 2
    assert b"tia.svg" in ended.stderr
    assert (tmp_path / "tia.svg").read_text() == "mine"
    assert run("schematic", TIA, "--out", ".", "--force", folder=tmp_path).returncode == 0
    assert (tmp_path / "tia.svg").read_text() != "mine"


def test_version_and_help_of_everything() -> None:
    assert run("--version").stdout.decode() == f"opto-ckt {__version__}\n"
    text = run("--help").stdout.decode()
    assert all(f"\n  {name} " in text for name in COMMANDS)


@pytest.mark.parametrize("command", COMMANDS)
def test_every_command_has_help(command: str) -> None:
    ended = run(command, "--help")
    assert ended.returncode == 0
    assert f"Usage: opto-ckt {command}" in ended.stdout.decode()
    assert ended.stderr == b""
