"""The same networks by complex numbers at one frequency: a plain nodal matrix and numpy's solver."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network import Expansion

Matrix = NDArray[np.complex128]


class Direct:
    """Nodal matrix of one lane at one frequency [Hz]; `opened` sets the gain of the loop primitive to zero."""

    def __init__(
        self, expansion: Expansion, values: Mapping[str, float], frequency: float, opened: bool = False
    ) -> None:
        self.expansion, self.values, self.s = expansion, values, 2j * np.pi * frequency
        nodes = {node for primitive in expansion.primitives for node in primitive.nodes} - {"0"}
        self.index = {node: number for number, node in enumerate(sorted(nodes))}
        branches = [primitive for primitive in expansion.primitives if primitive.kind in "LEV"]
        size = len(self.index) + len(branches)
        self.matrix: Matrix = np.zeros((size, size), dtype=complex)
        row = len(self.index)
        for primitive in expansion.primitives:
            value = 0.0 if opened and primitive.name == expansion.loop else float(primitive.value(values))
            incidence = self.incidence(primitive.nodes[0], primitive.nodes[1])
            control = self.incidence(*primitive.nodes[2:]) if len(primitive.nodes) == 4 else incidence
            if primitive.kind in "RCG":
                if primitive.kind == "R":
                    admittance: complex = 1 / value
                else:
                    admittance = value * (self.s if primitive.kind == "C" else 1)
                self.matrix += admittance * np.outer(incidence, control)
                continue
            self.matrix[:, row] += incidence
            self.matrix[row] += incidence
            if primitive.kind == "E":
                self.matrix[row] -= value * control
            if primitive.kind == "L":
                self.matrix[row, row] -= self.s * value
            row += 1

    def incidence(self, first: str, second: str) -> Matrix:
        vector = np.zeros(len(self.matrix), dtype=complex)
        for node, sign in ((first, 1), (second, -1)):
            if node != "0":
                vector[self.index[node]] += sign
        return vector

    def voltages(self, nodes: tuple[str, str], current: float = 1.0) -> Matrix:
        """All voltages for a current from the first node through a source to the second."""
        return np.linalg.solve(self.matrix, -current * self.incidence(*nodes))

    def output(self, nodes: tuple[str, str], current: float = 1.0) -> complex:
        return complex(self.incidence(*self.expansion.output) @ self.voltages(nodes, current))

    def transfer(self) -> complex:
        return self.output(self.expansion.input, float(self.expansion.gain(self.values)))

    def density(self) -> float:
        """Output noise [V²/Hz]."""
        total = 0.0
        frequency = abs(self.s) / (2 * np.pi)
        for generator in self.expansion.generators:
            corner = float(generator.corner(self.values)) if generator.corner else 0.0
            density = float(generator.density(self.values)) * (1 + corner / frequency)
            total += density * abs(self.output(generator.nodes)) ** 2
        return total


def return_ratio(expansion: Expansion, values: Mapping[str, float], frequency: float) -> complex:
    """What comes back to the control of the loop primitive, negated, when its source is driven as by a control of 1."""
    (loop,) = [primitive for primitive in expansion.primitives if primitive.name == expansion.loop]
    network = Direct(expansion, values, frequency, opened=True)
    control = network.incidence(*loop.nodes[2:])
    gain = float(loop.value(values))
    if loop.kind == "G":
        returned = network.voltages((loop.nodes[0], loop.nodes[1]), gain)
    else:
        branches = [primitive.name for primitive in expansion.primitives if primitive.kind in "LEV"]
        drive: Any = np.zeros(len(network.matrix), dtype=complex)
        drive[len(network.index) + branches.index(loop.name)] = gain
        returned = np.linalg.solve(network.matrix, drive)
    return -complex(control @ returned)
