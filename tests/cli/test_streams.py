"""Pipes, colour, completion, faults and start-up of the program."""

from __future__ import annotations

import os
import pty
import re
import signal
import subprocess
import sys
from pathlib import Path

import click
import pytest

from opto_ckt.circuits import CIRCUITS
from opto_ckt.cli import main as program
from opto_ckt.cli import streams
from opto_ckt.cli.main import COMMANDS
from tests.cli.process import PROGRAM, ROOT, TIA, modules, run

HEAVY = {"numpy", "pydantic", "scipy", "sympy", "lcapy", "schemdraw", "matplotlib"}


@pytest.mark.parametrize("arguments", [("--help",), ("--version",), ("siez",), (), ("--tea",)])
def test_help_and_usage_errors_import_no_command_and_nothing_heavy(arguments: tuple[str, ...]) -> None:
    found = modules(*arguments)
    assert "opto_ckt.cli.main" in found
    assert not found & HEAVY
    assert not {f"opto_ckt.cli.{command}" for command in COMMANDS} & found


@pytest.mark.parametrize(
    "arguments", [("size",), ("size", "--tea", "x"), ("start", "tea"), ("formula", "tea"), ("bom", "--help")]
)
def test_usage_errors_of_a_command_import_nothing_heavy(arguments: tuple[str, ...]) -> None:
    assert not modules(*arguments) & HEAVY


def test_sizing_keeps_away_from_algebra_and_drawing() -> None:
    assert not modules("size", TIA) & (HEAVY - {"numpy", "pydantic"})


def test_a_pipe_is_never_coloured_unless_it_is_asked_for() -> None:
    assert b"\x1b" not in run("size", TIA).stdout
    assert b"\x1b[" in run("size", TIA, "--color", "always", env={"NO_COLOR": "1"}).stdout


def on_terminal(*arguments: str, **env: str) -> str:
    """What a terminal gets to see."""
    try:
        leader, follower = pty.openpty()
    except OSError as error:  # a container may have no devices of that kind, and then no terminal to look at
        pytest.skip(f"no terminal can be opened here: {error}")
    clean = {name: value for name, value in os.environ.items() if name != "NO_COLOR"}
    process = subprocess.Popen(
        (*PROGRAM, *arguments),
        stdout=follower,
        stderr=subprocess.DEVNULL,
        env={**clean, "TERM": "xterm", **env},
        cwd=ROOT,
    )
    os.close(follower)
    seen = b""
    while True:
        try:
            piece = os.read(leader, 65536)
        except OSError:  # the other end is closed
            break
        if not piece:
            break
        seen += piece
    process.wait()
    os.close(leader)
    return seen.decode()


def test_a_terminal_is_coloured() -> None:
    coloured = on_terminal("size", TIA)
    assert "\x1b[1m" in coloured
    assert re.sub(r"\x1b\[[0-9;]*m", "", coloured).splitlines()[0] == run("size", TIA).stdout.decode().splitlines()[0]


@pytest.mark.parametrize(
    ("wanted", "terminal", "env", "coloured"),
    [
        ("auto", True, {}, True),
        ("auto", False, {}, False),
        ("auto", True, {"NO_COLOR": "1"}, False),
        ("auto", True, {"NO_COLOR": ""}, True),
        ("auto", True, {"TERM": "dumb"}, False),
        ("never", True, {}, False),
        ("always", False, {"NO_COLOR": "1"}, True),
    ],
)
def test_when_output_is_coloured(
    wanted: streams.Colour, terminal: bool, env: dict[str, str], coloured: bool, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(streams, "on_terminal", lambda: terminal)
    for name, value in {"TERM": "xterm", **env}.items():
        monkeypatch.setenv(name, value)
    if "NO_COLOR" not in env:
        monkeypatch.delenv("NO_COLOR", raising=False)
    assert streams.coloured(wanted) == coloured


def test_the_width_of_a_terminal_is_nothing_to_a_pipe() -> None:
    assert run("size", TIA, env={"COLUMNS": "30"}).stdout == run("size", TIA).stdout


@pytest.mark.parametrize("command", ["size", "bom", "circuits"])
def test_a_closed_pipe_ends_it_quietly(command: str) -> None:
    arguments = (*PROGRAM, command, "-v") if command == "circuits" else (*PROGRAM, command, TIA)
    process = subprocess.Popen(arguments, stdout=subprocess.PIPE, stderr=subprocess.PIPE, cwd=ROOT)
    assert process.stdout
    assert process.stderr
    process.stdout.close()
    said = process.stderr.read()
    process.stderr.close()
    assert process.wait() == -signal.SIGPIPE
    assert said == b""


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="the system has no device that is always full")
def test_output_that_cannot_be_written_is_said_and_ends_in_74() -> None:
    with open("/dev/full", "wb") as full:
        ended = subprocess.run((*PROGRAM, "circuits"), stdout=full, stderr=subprocess.PIPE, cwd=ROOT, check=False)
    assert ended.returncode == 74
    assert ended.stderr.startswith(b"opto-ckt: output cannot be written: ")
    assert len(ended.stderr.splitlines()) == 1


def test_output_is_utf_8_whatever_the_locale() -> None:
    ended = run("size", TIA, env={"LC_ALL": "C", "PYTHONIOENCODING": "ascii"})
    assert ended.returncode == 0
    assert "kΩ" in ended.stdout.decode()


def interrupted() -> None:
    raise KeyboardInterrupt


def test_an_interrupt_ends_in_130(monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    monkeypatch.setattr(program, "prepare", lambda: None)
    monkeypatch.setattr(program.LazyGroup, "get_command", lambda *_: click.Command("size", callback=interrupted))
    with pytest.raises(SystemExit) as ended:
        program.main(["size"])
    assert ended.value.code == 130
    assert capsys.readouterr().err.strip() == ""


def fault() -> None:
    raise ZeroDivisionError("by design")


def test_a_fault_of_the_program_is_one_plain_sentence(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.setattr(program, "prepare", lambda: None)
    monkeypatch.setattr(program.LazyGroup, "get_command", lambda *_: click.Command("size", callback=fault))
    monkeypatch.delenv("OPTO_CKT_DEBUG", raising=False)
    with pytest.raises(SystemExit) as ended:
        program.main(["size"])
    assert ended.value.code == 70
    said = capsys.readouterr().err
    assert (
        said == "opto-ckt: fault of this program, not of the design: ZeroDivisionError; OPTO_CKT_DEBUG=1 shows where\n"
    )


def test_where_a_fault_arose_is_shown_on_demand(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(program, "prepare", lambda: None)
    monkeypatch.setattr(program.LazyGroup, "get_command", lambda *_: click.Command("size", callback=fault))
    monkeypatch.setenv("OPTO_CKT_DEBUG", "1")
    with pytest.raises(ZeroDivisionError):
        program.main(["size"])


@pytest.mark.parametrize("shell", ["bash", "zsh", "fish"])
def test_completion_scripts(shell: str) -> None:
    ended = run("completion", shell)
    assert ended.returncode == 0
    assert b"_OPTO_CKT_COMPLETE" in ended.stdout


def completed(*words: str) -> list[str]:
    typed = {
        "COMP_WORDS": " ".join(("opto-ckt", *words)),
        "COMP_CWORD": str(len(words)),
        "_OPTO_CKT_COMPLETE": "bash_complete",
    }
    # the installed script and the module are one program; completion asks for it by the script's name
    code = "import sys; sys.argv = ['opto-ckt']; from opto_ckt.cli.main import main; main()"
    found = subprocess.run(
        (sys.executable, "-c", code), capture_output=True, cwd=ROOT, env={**os.environ, **typed}, check=False
    )
    return [line.split(",")[1] for line in found.stdout.decode().splitlines()]


def test_commands_and_circuits_are_completed() -> None:
    assert completed("s") == ["size", "schematic", "start"]
    assert completed("formula", "ti") == [name for name in CIRCUITS if name.startswith("ti")]
    assert "photodiode" in completed("start", "p")
