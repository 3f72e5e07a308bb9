"""The program as a process of its own, as its users run it."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Mapping
from functools import cache
from pathlib import Path

ROOT = Path(__file__).parents[2]
TIA = str(ROOT / "designs" / "tia.toml")
PROGRAM = (sys.executable, "-m", "opto_ckt")


def run(
    *arguments: str, stdin: str | bytes = b"", folder: Path | None = None, env: Mapping[str, str] | None = None
) -> subprocess.CompletedProcess[bytes]:
    """Run one command line; its streams as bytes."""
    return _run(arguments, stdin, folder, env) if folder or env else _run_once(arguments, stdin)


@cache
def _run_once(arguments: tuple[str, ...], stdin: str | bytes) -> subprocess.CompletedProcess[bytes]:
    """A command line that leaves nothing behind is run once, however many tests look at what it did."""
    return _run(arguments, stdin, None, None)


def _run(
    arguments: tuple[str, ...], stdin: str | bytes, folder: Path | None, env: Mapping[str, str] | None
) -> subprocess.CompletedProcess[bytes]:
    clean = {name: value for name, value in os.environ.items() if name not in ("NO_COLOR", "OPTO_CKT_DEBUG", "COLUMNS")}
    return subprocess.run(
        (*PROGRAM, *arguments),
        input=stdin.encode() if isinstance(stdin, str) else stdin,
        capture_output=True,
        cwd=folder,
        env={**clean, "PYTHONPATH": str(ROOT), **(env or {})},
        timeout=60,
        check=False,
    )


def modules(*arguments: str) -> set[str]:
    """Names of the modules that a command line imports."""
    found = subprocess.run(
        (sys.executable, "-X", "importtime", "-m", "opto_ckt", *arguments), capture_output=True, cwd=ROOT, check=False
    )
    lines = found.stderr.decode().splitlines()
    return {line.rsplit("|", 1)[1].strip() for line in lines if line.startswith("import time:")}
