"""The same receiver in a deck written by hand, run by ngspice, against the engine."""

from __future__ import annotations

import shutil
import subprocess
from math import pi

import numpy as np
import pytest

from opto_ckt.analyses import noise, response, stability
from opto_ckt.analyses.network import Network
from tests.analyses.networks import RECEIVER, lane, receiver, scattered

pytestmark = pytest.mark.skipif(shutil.which("ngspice") is None, reason="ngspice is not on PATH")

DECK = """receiver, its noise and its opened loop
iin 0 diode dc 0 ac 1
.subckt front diode sum plus first control amp out
rshunt diode 0 {shunt!r}
cjunction diode 0 {junction!r}
rseries diode sum {series!r}
cinput sum 0 {input!r}
r1 sum amp {R1!r}
c1 sum amp {C1!r}
gstage1 first 0 control 0 1e-3
rgain first 0 {stage!r} noisy=0
cdominant first 0 {dominant!r}
gstage2 0 second first 0 1e-3
runity second 0 1e3 noisy=0
cpole second 0 {pole!r}
ebuffer ideal 0 second 0 1
routput ideal amp {output!r} noisy=0
r2 amp out {R2!r}
c2 out 0 {C2!r}
.ends
xclosed diode sum plus first control amp out front
rnoise plus 0 {noise!r}
econtrol control 0 sum plus 1
* loop opened: the first stage is driven, what comes back is read at lsum
vdrive ldrive 0 dc 0 ac 1
xopened ldiode lsum lplus lfirst ldrive lamp lout front
.control
set numdgt=15
set wr_singlescale
ac dec 5 1e3 1e9
wrdata gain.txt real(v(out)) imag(v(out))
wrdata loop.txt real(v(lsum)) imag(v(lsum))
noise v(out) iin dec 5 1e3 1e9
setplot noise1
wrdata noise.txt onoise_spectrum
.endc
.end
"""


@pytest.fixture(scope="module", params=[None, 4], ids=["nominal", "scattered"])
def simulated(request, tmp_path_factory):
    values = RECEIVER if request.param is None else lane(scattered(RECEIVER, 1, request.param), 0)
    values = values | {"corner": 0.0, "photocurrent": 0.0}
    folder = tmp_path_factory.mktemp("ngspice")
    derived = {
        "stage": values["gain"] * 1e3,
        "dominant": 1e-3 / (2 * pi * values["gain_bandwidth"]),
        "pole": 1e-3 / (2 * pi * values["second_pole"]),
    }
    (folder / "receiver.cir").write_text(DECK.format(**values, **derived))
    run = subprocess.run(["ngspice", "-b", "receiver.cir"], cwd=folder, capture_output=True, text=True, timeout=60)
    tables = {name: folder / f"{name}.txt" for name in ("gain", "loop", "noise")}
    assert all(path.exists() for path in tables.values()), run.stdout + run.stderr
    return Network(receiver()).evaluate(values), {name: np.loadtxt(path) for name, path in tables.items()}


def test_gain(simulated):
    evaluation, tables = simulated
    frequency, real, imaginary = tables["gain"][:, :3].T
    found = response.transfer_at(evaluation, frequency[:, None])[:, 0]
    assert found == pytest.approx(real + 1j * imaginary, rel=1e-6)


def test_loop_gain(simulated):
    evaluation, tables = simulated
    frequency, real, imaginary = tables["loop"][:, :3].T
    found = stability.return_ratio_at(evaluation, frequency[:, None])[:, 0]
    assert found == pytest.approx(-(real + 1j * imaginary), rel=1e-6)


def test_noise_density(simulated):
    evaluation, tables = simulated
    frequency, density = tables["noise"][:, :2].T
    found = np.sqrt(noise.output_density(evaluation, frequency[:, None])[:, 0])
    assert found == pytest.approx(density, rel=1e-6)
