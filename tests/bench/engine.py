"""Timings of the engine beside sympy, lcapy and ngspice on the receiver of order 6; run by hand, alone on the machine.

OPENBLAS_NUM_THREADS=1 python -m tests.bench.engine
"""

from __future__ import annotations

import subprocess
import sys
import tempfile
from collections.abc import Callable, Mapping
from math import pi
from pathlib import Path
from time import perf_counter
from typing import Any

import numpy as np

from opto_ckt.analyses import noise, response, stability
from opto_ckt.analyses.network import Network
from tests.analyses.networks import RECEIVER, receiver
from tests.analyses.test_ngspice import DECK

DRAWS = 200_000
BLOCK = 8192
SPREAD = 0.1
SIMULATED = 150


def figures(network: Network, values: Mapping[str, Any]) -> tuple[np.ndarray, ...]:
    """Gain, bandwidth, peaking, phase margin, rms noise, its input-referred total, spot noise, stability."""
    evaluation = network.evaluate(values)
    gain, rms = response.dc_gain(evaluation), noise.output_rms(evaluation)
    return (
        gain,
        response.bandwidth(evaluation),
        response.peaking(evaluation),
        stability.phase_margin(evaluation),
        rms,
        rms / np.abs(gain),
        noise.input_density(evaluation, 1e4),
        evaluation.stable,
    )


def best(action: Callable[[], object], repeats: int) -> float:
    """Shortest time of several runs. [s]"""
    times = []
    for _ in range(repeats):
        start = perf_counter()
        action()
        times.append(perf_counter() - start)
    return min(times)


def drawn(generator: np.random.Generator, lanes: int) -> dict[str, Any]:
    return {name: value * generator.uniform(1 - SPREAD, 1 + SPREAD, lanes) for name, value in RECEIVER.items()}


def draws_a_second(network: Network) -> float:
    """All figures of many draws, their drawing included."""

    def run() -> None:
        generator = np.random.Generator(np.random.SFC64(1))
        results = np.empty((8, DRAWS))
        for start in range(0, DRAWS, BLOCK):
            part = slice(start, min(start + BLOCK, DRAWS))
            results[:, part] = figures(network, drawn(generator, part.stop - part.start))

    return DRAWS / best(run, 3)


def simulated_a_second() -> float:
    """ngspice in one process: values altered, gain and loop at 50 points a decade, noise at the same points."""
    generator = np.random.default_rng(1)
    head, _ = DECK.split(".control")
    derived = {
        "stage": RECEIVER["gain"] * 1e3,
        "dominant": 1e-3 / (2 * pi * RECEIVER["gain_bandwidth"]),
        "pole": 1e-3 / (2 * pi * RECEIVER["second_pole"]),
    }
    names = {
        "rshunt": "shunt", "cjunction": "junction", "rseries": "series", "cinput": "input", "r1": "R1", "c1": "C1",
        "routput": "output", "r2": "R2", "c2": "C2",
    }  # fmt: skip
    nominal = RECEIVER | derived
    lines = [head.format(**nominal), ".control"]
    for _ in range(SIMULATED):
        for element, name in (*names.items(), ("rgain", "stage"), ("cdominant", "dominant"), ("cpole", "pole")):
            value = nominal[name] * generator.uniform(1 - SPREAD, 1 + SPREAD)
            lines += [f"alter {element[0]}.{copy}.{element} = {value:.9g}" for copy in ("xclosed", "xopened")]
        lines += ["ac dec 50 100 1e9", "noise v(out) iin dec 50 100 1e9", "destroy all"]
    lines += ["quit", ".endc", ".end"]

    def run(deck: str) -> float:
        with tempfile.TemporaryDirectory() as folder:
            Path(folder, "many.cir").write_text(deck)
            command = ["ngspice", "-b", "many.cir"]
            return best(lambda: subprocess.run(command, cwd=folder, capture_output=True, timeout=300, check=False), 2)

    empty = "\n".join([lines[0], ".control", "quit", ".endc", ".end", ""])
    return SIMULATED / (run("\n".join([*lines, ""])) - run(empty))


def derivation() -> dict[str, float]:
    """Times to derive the network functions. [s]"""

    def ours() -> None:
        network = Network(receiver())
        network.evaluate(RECEIVER).noise  # noqa: B018 - the noise program is compiled when first asked for

    result = {"engine, all functions": best(ours, 20)}
    from opto_ckt.analyses import symbolic  # its imports must not count

    network = symbolic.SymbolicNetwork(receiver())
    result["sympy, gain and loop"] = best(
        lambda: (symbolic.SymbolicNetwork(receiver()).transfer(), network.return_ratio()), 2
    )
    import sympy

    symbols = {name: sympy.Symbol(f"{name}_") for name in RECEIVER}  # some names are functions of lcapy
    circuit, number = symbolic.lcapy_circuit(receiver(), symbols)
    ports = (number["diode"], "0", number["out"], "0")
    result["lcapy, gain"] = best(lambda: circuit.transimpedance(*ports), 1)
    return result


def main() -> None:
    network = Network(receiver())
    for lanes in (1, 64, 3000):
        values: dict[str, Any] = drawn(np.random.default_rng(0), lanes) if lanes > 1 else dict(RECEIVER)
        print(f"{lanes:5d} lanes, all figures: {1e3 * best(lambda values=values: figures(network, values), 30):.2f} ms")
    ours = draws_a_second(network)
    print(f"draws a second, one core: {ours:,.0f}")
    theirs = simulated_a_second()
    print(f"ngspice, values altered in one process: {theirs:,.0f} a second; ratio {ours / theirs:,.0f}")
    if "--derivation" in sys.argv:
        for name, seconds in derivation().items():
            print(f"derivation by {name}: {1e3 * seconds:.1f} ms")


if __name__ == "__main__":
    main()
