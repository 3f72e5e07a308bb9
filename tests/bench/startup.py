"""Start-up and run time as ratios on this machine, run by hand: ``python -m tests.bench.startup``.

Targets: sizing one design at most three times ``import numpy``; help and wrong usage at most six times a bare start.
"""

from __future__ import annotations

import subprocess
import sys
import time

from tests.cli.process import ROOT

RUNS = 15
PROGRAM = (sys.executable, "-m", "opto_ckt")


def best(*commands: tuple[str, ...]) -> list[float]:
    """Shortest wall time of each command, run in turns so that all meet the same machine. [s]"""
    times = [float("inf")] * len(commands)
    for _ in range(RUNS):
        for index, command in enumerate(commands):
            start = time.perf_counter()
            subprocess.run(command, cwd=ROOT, capture_output=True, check=False)
            times[index] = min(times[index], time.perf_counter() - start)
    return times


def main() -> None:
    """Print the ratios."""
    bare, numpy, tia, laser, usage, wrong = best(
        (sys.executable, "-c", "pass"),
        (sys.executable, "-c", "import numpy"),
        (*PROGRAM, "size", "designs/tia.toml"),
        (*PROGRAM, "size", "designs/laser-current.toml"),
        (*PROGRAM, "--help"),
        (*PROGRAM, "siz"),
    )
    print(f"bare start {bare * 1e3:.0f} ms, import numpy {numpy * 1e3:.0f} ms")
    for name, seconds in (("tia", tia), ("laser-current", laser)):
        print(f"size {name}: {seconds * 1e3:.0f} ms, {seconds / numpy:.1f} x import numpy (target 3)")
    for name, seconds in (("--help", usage), ("wrong usage", wrong)):
        print(f"{name}: {seconds * 1e3:.0f} ms, {seconds / bare:.1f} x a bare start (target 6)")


if __name__ == "__main__":
    main()
