"""The simulators' answers read back, and what happens where a simulator is missing or fails."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest

from opto_ckt.errors import OutsideProgramError
from opto_ckt.outputs import simulators
from opto_ckt.outputs.simulators import ENGINES, available, read_raw, run

DIVIDER = "divider\nv1 a 0 dc 2 ac 1\nr1 a b 1e3\nr2 b 0 1e3\nc1 b 0 1e-9\n.op\n.ac dec 5 1e3 1e6\n.end\n"
RAW = """Title: divider
Date: whenever
Plotname: AC Analysis
Flags: complex
No. Variables: 2
No. Points: 2
Variables:
\t0\tfrequency\tfrequency
\t1\tv(b)\tvoltage
Values:
0\t1e3,0.0
\t0.5,-0.25
1\t2e3,0.0
\t0.4,-0.3
Title: divider
Date: whenever
Plotname: Operating Point
Flags: real
No. Variables: 1
No. Points: 1
Variables:
\t0\tV(B)\tvoltage
Values:
0\t1.0
"""

here = [engine for engine in ENGINES if engine == "neospice" or which("ngspice")]


def test_raw_files_are_read_with_real_and_complex_plots() -> None:
    plots = read_raw(RAW)
    assert plots["ac"]["frequency"].tolist() == [1e3, 2e3]
    assert plots["ac"]["v(b)"].tolist() == [0.5 - 0.25j, 0.4 - 0.3j]
    assert plots["op"]["v(b)"].tolist() == [1.0]


@pytest.mark.parametrize("engine", here)
def test_an_engine_gives_operating_point_and_response(engine: str) -> None:
    plots = run(DIVIDER, engine)
    assert plots["op"]["v(b)"][0] == pytest.approx(1.0)
    expected = 0.5 / (1 + 2j * np.pi * plots["ac"]["frequency"] * 500 * 1e-9)
    np.testing.assert_allclose(plots["ac"]["v(b)"], expected, rtol=1e-9)


@pytest.mark.parametrize("engine", here)
def test_a_deck_that_is_wrong_ends_in_a_sentence(engine: str) -> None:
    with pytest.raises(OutsideProgramError, match=engine):
        run("wrong\nr1 a 0\nzz nonsense\n.op\n.end\n", engine)


@pytest.mark.parametrize("engine", ENGINES)
def test_a_missing_engine_says_how_to_get_it(engine: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(simulators, "available", lambda engine: False)
    with pytest.raises(OutsideProgramError, match=r"install") as refused:
        run(DIVIDER, engine)
    assert refused.value.exit_code == 5


def test_the_pip_installed_engine_is_here() -> None:
    assert available("neospice")
