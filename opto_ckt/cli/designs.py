"""From the name of a design file to its result."""

from __future__ import annotations

import sys
from collections.abc import Callable
from dataclasses import replace

from opto_ckt.circuit import Circuit
from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.design.files import LARGEST
from opto_ckt.design.reading import ReadDesign, read_request, read_text
from opto_ckt.design.sizing import size
from opto_ckt.outputs.report import verdict
from opto_ckt.request import Request
from opto_ckt.result import Result

STREAM = "-"
STREAM_NAME = "stdin"  #: in messages, and as stem of the files written


def read_design(path: str) -> ReadDesign:
    """Read one design file; ``-`` is standard input, whose part files are looked up from the working folder."""
    if path != STREAM:
        return read_request(path, circuit_of=_request_of, circuits=CIRCUITS)
    content = sys.stdin.buffer.read(LARGEST + 1) if sys.stdin is not None else b""
    return read_text(content, STREAM_NAME, circuit_of=_request_of, circuits=CIRCUITS)


def read_starter(circuit: Circuit) -> ReadDesign:
    """The design that a circuit is begun from."""
    return read_text(circuit.starter, circuit.name, circuit_of=_request_of, circuits=CIRCUITS)


def sized(path: str, *, compared: bool = False) -> Result:
    """Read and size one design; ``compared``: beside the other circuits that would take it."""
    read = read_design(path)
    result = size(read, load(read.request.circuit))
    if not compared:
        return result
    from opto_ckt.design.comparison import alternatives

    return replace(result, alternatives=alternatives(read.request, CIRCUITS, load))


def ended(results: list[Result], say: Callable[[str], None]) -> int:
    """Exit code of a command that printed something else than the verdict; says so where a requirement is missed."""
    missed = [result for result in results if result.verdict == "missed"]
    for result in missed:
        say(f"{result.head.stem}: {verdict(result)}; opto-ckt size tells which")
    return 1 if missed else 0


def _request_of(name: str) -> type[Request]:
    kind: type[Request] = load(name).request
    return kind
