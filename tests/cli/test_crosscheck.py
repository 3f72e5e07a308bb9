"""``opto-ckt crosscheck`` as a process; what the simulators say is tested where they are run."""

from __future__ import annotations

import json
from dataclasses import replace

import pytest

from opto_ckt.cli import crosscheck as command
from opto_ckt.outputs import crosscheck, simulators
from opto_ckt.outputs.crosscheck import Row
from tests.cli.process import TIA, run

ROW = Row("nominal", "gain", 1.0, 1.0, "1", 0.0, 1e-4, "dB")


def test_agreement_ends_in_0_with_a_table() -> None:
    ended = run("crosscheck", TIA)
    assert ended.returncode == 0
    assert ended.stderr == b""
    assert "all agree within their bounds" in ended.stdout.decode()


def test_the_second_engine_gives_the_same_rows_as_json() -> None:
    ended = run("crosscheck", TIA, "--engine", "neospice", "--json")
    rows = json.loads(ended.stdout)["rows"]
    assert ended.returncode == 0
    assert rows
    assert all(row["ok"] for row in rows)


def test_a_missing_simulator_ends_in_5() -> None:
    ended = run("crosscheck", TIA, "--engine", "ngspice", env={"PATH": "/nowhere"})
    assert ended.returncode == 5
    assert ended.stdout == b""
    assert b"ngspice" in ended.stderr
    assert b"Traceback" not in ended.stderr


def test_an_engine_that_nobody_knows_is_wrong_usage() -> None:
    assert run("crosscheck", TIA, "--engine", "tea").returncode == 2


@pytest.mark.parametrize(("deviation", "code"), [(0.0, 0), (1.0, 1)])
def test_what_lies_apart_ends_in_1(
    deviation: float, code: int, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.setattr(crosscheck, "crosscheck", lambda result, engine: [replace(ROW, deviation=deviation)])
    monkeypatch.setattr(simulators, "ngspice_available", lambda: True)
    assert command.command.main([TIA], standalone_mode=False) == code
    assert ("APART" in capsys.readouterr().out) == bool(code)
