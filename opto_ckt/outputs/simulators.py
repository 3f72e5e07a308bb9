"""Runs a deck in ngspice or in the pip-installed engine and gives its vectors back under the same names."""

from __future__ import annotations

import os
import subprocess
from collections.abc import Mapping
from importlib import import_module
from pathlib import Path
from shutil import which
from tempfile import TemporaryDirectory
from typing import Any

import numpy as np
from numpy.typing import NDArray

from opto_ckt.errors import OutsideProgramError

ENGINES = ("ngspice", "neospice")
LONGEST_RUN = 120.0  #: after which a run is given up [s]

Vectors = Mapping[str, NDArray[Any]]
"""Vectors of one plot: ``frequency`` or ``time``, ``v(node)``, ``onoise`` [V/√Hz], ``inoise`` [per √Hz]."""

ANALYSES = (".op", ".ac", ".noise", ".tran")
PLOTS = {"Operating Point": "op", "AC Analysis": "ac", "Transient Analysis": "tran", "Noise Spectral Density": "noise"}


def available(engine: str) -> bool:
    """Whether an engine can be run here."""
    if engine == "ngspice":
        return which("ngspice") is not None
    try:
        import_module("neospice")
    except ImportError:
        return False
    return True


def ngspice_available() -> bool:
    """Whether ngspice is on the path."""
    return available("ngspice")


def run(deck: str, engine: str) -> dict[str, Vectors]:
    """Plots of a deck by kind: ``op``, ``ac``, ``noise``, ``tran``.

    Raises
    ------
    OutsideProgramError : the engine is missing, fails, or gives no result.
    """
    if not available(engine):
        way = "install it with the system's package manager" if engine == "ngspice" else "install opto-ckt[crosscheck]"
        raise OutsideProgramError(f"{engine} is not here: {way}, or choose the other engine with --engine")
    return _ngspice(deck) if engine == "ngspice" else _neospice(deck)


def _ngspice(deck: str) -> dict[str, Vectors]:
    """Batch run; judged by the raw file, for the exit code says nothing."""
    with TemporaryDirectory() as folder:
        source, raw = Path(folder, "deck.cir"), Path(folder, "deck.raw")
        source.write_text(deck, encoding="ascii")
        environment = {**os.environ, "SPICE_ASCIIRAWFILE": "1"}
        try:
            done = subprocess.run(
                ["ngspice", "-b", "-n", "-r", str(raw), str(source)],
                stdin=subprocess.DEVNULL, capture_output=True, text=True, timeout=LONGEST_RUN, env=environment,
                cwd=folder, check=False,
            )  # fmt: skip
        except subprocess.TimeoutExpired:
            raise OutsideProgramError(f"ngspice did not finish within {LONGEST_RUN:.0f} s") from None
        if not raw.exists():
            raise OutsideProgramError(f"ngspice gave no result: {_last_words(done.stdout + done.stderr)}")
        plots = read_raw(raw.read_text(encoding="ascii", errors="replace"))
    if not plots:
        raise OutsideProgramError("ngspice gave an empty result")
    return plots


def _last_words(text: str) -> str:
    lines = [line.strip() for line in text.splitlines() if "error" in line.lower()] or text.splitlines()[-3:]
    return "; ".join(lines[:3]) or "no message"


def read_raw(text: str) -> dict[str, Vectors]:
    """Plots of an ASCII raw file; a plot whose kind is not known is left out."""
    plots: dict[str, Vectors] = {}
    for block in text.split("Title:")[1:]:
        header, _, body = block.partition("Values:\n")
        fields = dict(line.split(":", 1) for line in header.split("\nVariables:")[0].splitlines()[1:] if ":" in line)
        plot = fields.get("Plotname", "").strip()
        kind = next((short for long, short in PLOTS.items() if plot.startswith(long)), None)
        if kind is None:
            continue
        names = [line.split()[1].lower() for line in header.split("\nVariables:")[1].splitlines() if line.strip()]
        numbers = [_number(token) for token in _tokens(body, len(names))]
        columns = np.array(numbers).reshape(-1, len(names)).T
        plots[kind] = {_short(name): column for name, column in zip(names, columns, strict=True)}
    return {kind: _real_axis(plot) for kind, plot in plots.items()}


def _tokens(body: str, width: int) -> list[str]:
    """Values without the running index that stands before each point."""
    tokens = body.split()
    return [token for index, token in enumerate(tokens) if index % (width + 1)]


def _number(token: str) -> complex:
    real, _, imaginary = token.partition(",")
    return complex(float(real), float(imaginary or 0.0))


def _short(name: str) -> str:
    return {"onoise_spectrum": "onoise", "inoise_spectrum": "inoise"}.get(name, name)


def _real_axis(plot: Vectors) -> Vectors:
    """Everything real except the answers of an AC analysis."""
    if any(np.any(column.imag) for column in plot.values()):
        return {name: column.real if name == "frequency" else column for name, column in plot.items()}
    return {name: column.real for name, column in plot.items()}


def _neospice(deck: str) -> dict[str, Vectors]:
    """One run an analysis: the engine answers with the last analysis of a deck alone."""
    engine: Any = import_module("neospice")
    cards = deck.splitlines()
    analyses = [line for line in cards if line.split(" ")[0] in ANALYSES]
    plots: dict[str, Vectors] = {}
    for analysis in analyses:
        text = "\n".join(line for line in cards if line not in analyses or line == analysis) + "\n"
        try:
            result = engine.run(text)
        except (RuntimeError, ValueError) as error:
            raise OutsideProgramError(f"neospice failed: {error}") from None
        plots[analysis.split()[0][1:]] = _vectors(result, analysis)
    return plots


def _vectors(result: Any, analysis: str) -> Vectors:
    if analysis.startswith(".noise"):
        found = result.noise
        return {
            "frequency": np.asarray(found.frequency),
            "onoise": np.sqrt(np.asarray(found.output_noise_density)),
            "inoise": np.sqrt(np.asarray(found.input_noise_density)),
        }
    found = {".op": result.dc, ".ac": result.ac, ".tran": result.transient}[analysis.split()[0]]
    if found is None:
        raise OutsideProgramError(f"neospice gave no result for {analysis.split()[0]}")
    names = [name for name in found.signal_names() if name.lower().startswith("v(")]
    plot = {name.lower(): np.atleast_1d(np.asarray(found.voltage(name[2:-1]))) for name in names}
    axis = {".ac": "frequency", ".tran": "time"}.get(analysis.split()[0])
    if axis:
        plot[axis] = np.asarray(getattr(found, axis))
    return plot
