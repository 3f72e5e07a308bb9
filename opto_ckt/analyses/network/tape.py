"""Programs as a list of steps on registers, run on floats or on lanes."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from opto_ckt.analyses.network.lanes import Array
from opto_ckt.analyses.network.program import ADD, DIVIDE, MULTIPLY, SUBTRACT, Node, Operation, Program

BLOCK = 8192
"""Lanes that run through a program at a time, so that its registers stay in the cache."""

UFUNCS: dict[Operation, np.ufunc] = {ADD: np.add, SUBTRACT: np.subtract, MULTIPLY: np.multiply, DIVIDE: np.divide}


class Tape:
    """The steps that compute some nodes of a program, in order, with registers reused as soon as they are free."""

    def __init__(self, program: Program, outputs: Sequence[Node]) -> None:
        needed = _needed(outputs)
        last_use: dict[Node, int] = {}
        for position, node in enumerate(needed):
            for argument in node.arguments:
                last_use[argument] = position
        kept = set(outputs)
        registers: dict[Node, int] = {}
        names = {node: name for name, node in program.inputs.items()}
        self._start: list[Any] = []
        self.inputs: list[tuple[str, int]] = []
        for node in needed:
            if node.operation is None:
                registers[node] = len(self._start)
                self._start.append(node.constant)
                if node.constant is None:
                    self.inputs.append((names[node], registers[node]))
        free: list[int] = []
        self._steps: list[tuple[Operation, int, int, int]] = []
        for position, node in enumerate(needed):
            if node.operation is None:
                continue
            left, right = (registers[argument] for argument in node.arguments)
            for argument in set(node.arguments):
                if last_use[argument] == position and argument.operation is not None and argument not in kept:
                    free.append(registers[argument])
            if free:
                registers[node] = free.pop()
            else:
                registers[node] = len(self._start)
                self._start.append(None)
            self._steps.append((node.operation, registers[node], left, right))
        self._outputs = [registers[node] for node in outputs]

    def __len__(self) -> int:
        return len(self._steps)

    def run(self, values: Mapping[str, Any]) -> list[Any]:
        """The outputs at the given input values, each a float or an array of lanes."""
        registers = self._start.copy()
        for name, register in self.inputs:
            registers[register] = values[name]
        for operation, target, left, right in self._steps:
            registers[target] = operation(registers[left], registers[right])
        return [registers[register] for register in self._outputs]

    def run_lanes(self, values: Mapping[str, Any], lanes: int) -> Array:
        """The outputs as rows of a table, block after block of lanes; values are floats or arrays of that length.

        Where a division by zero or an overflow occurs the table holds inf or nan.
        """
        table = np.empty((len(self._outputs), lanes))
        scratch = np.empty((len(self._start), min(lanes, BLOCK))) if lanes > 1 else None
        with np.errstate(all="ignore"):
            for start in range(0, lanes, BLOCK):
                part = slice(start, start + BLOCK)
                within = {
                    name: values[name][part] if isinstance(values[name], np.ndarray) else values[name]
                    for name, _ in self.inputs
                }
                try:
                    self._fill(table[:, part], within, scratch)
                except ArithmeticError:  # floats raise where arrays give inf or nan
                    self._fill(table[:, part], {name: np.atleast_1d(value) for name, value in within.items()}, scratch)
        return table

    def _fill(self, table: Array, values: Mapping[str, Any], scratch: Array | None) -> None:
        """Compute one block into its table, in place as far as possible."""
        if scratch is None:
            table[:, 0] = [float(np.squeeze(value)) for value in self.run(values)]
            return
        rows, places = list(table), list(scratch[:, : table.shape[1]])
        for row, register in zip(rows, self._outputs, strict=True):
            places[register] = row
        registers = self._start.copy()
        for name, register in self.inputs:
            registers[register] = values[name]
        for operation, target, left, right in self._steps:
            first, second = registers[left], registers[right]
            if type(first) is np.ndarray or type(second) is np.ndarray:
                registers[target] = UFUNCS[operation](first, second, places[target])
            else:
                registers[target] = operation(first, second)
        for row, register in zip(rows, self._outputs, strict=True):
            if registers[register] is not row:
                row[:] = registers[register]

    def run_rows(self, rows: Array) -> Array:
        """The same for inputs that are named by the number of their row."""
        lanes = rows.shape[1]
        values = {str(number): row if lanes > 1 else float(row[0]) for number, row in enumerate(rows)}
        return self.run_lanes(values, lanes)


def _needed(outputs: Sequence[Node]) -> list[Node]:
    """The nodes that some outputs depend on, each after its arguments."""
    found: set[Node] = set()
    waiting = list(outputs)
    while waiting:
        node = waiting.pop()
        if node not in found:
            found.add(node)
            waiting.extend(node.arguments)
    return sorted(found, key=lambda node: node.index)
