"""Straight-line programs: expressions written as a graph in which equal ones are shared."""

from __future__ import annotations

import operator
from collections.abc import Callable, Iterator, Mapping
from hashlib import blake2b
from typing import Any

PRIME = 2**61 - 1
"""Field of the zero test: an expression that is zero at a random point of this field is zero everywhere, but for a
chance of about its degree in 2**61."""

Operation = Callable[[Any, Any], Any]
ADD, SUBTRACT, MULTIPLY, DIVIDE = operator.add, operator.sub, operator.mul, operator.truediv


class Node:
    """One value of a program; arithmetic on nodes writes further nodes."""

    __slots__ = ("arguments", "constant", "index", "operation", "program")

    def __init__(self, program: Program, operation: Operation | None, arguments: tuple[Node, ...]) -> None:
        self.program = program
        self.operation = operation
        self.arguments = arguments
        self.constant: float | None = None
        self.index = len(program.nodes)
        program.nodes.append(self)

    def __add__(self, other: Node | float) -> Node:
        return self.program.add(self, self.program.node(other))

    def __sub__(self, other: Node | float) -> Node:
        return self.program.subtract(self, self.program.node(other))

    def __rsub__(self, other: float) -> Node:
        return self.program.subtract(self.program.node(other), self)

    def __mul__(self, other: Node | float) -> Node:
        return self.program.multiply(self, self.program.node(other))

    def __truediv__(self, other: Node | float) -> Node:
        return self.program.divide(self, self.program.node(other))

    def __rtruediv__(self, other: float) -> Node:
        return self.program.divide(self.program.node(other), self)

    def __neg__(self) -> Node:
        return self.program.negate(self)

    def __pos__(self) -> Node:
        return self

    def __pow__(self, exponent: int) -> Node:
        if int(exponent) != exponent:
            raise ValueError(f"only whole powers can be expanded, got {exponent}")
        result = self.program.node(1.0)
        for _ in range(abs(int(exponent))):
            result = result * self
        return result if exponent >= 0 else 1.0 / result

    __radd__ = __add__
    __rmul__ = __mul__


class Program:
    """Grows a graph in which equal expressions are one node."""

    def __init__(self) -> None:
        self.nodes: list[Node] = []
        self.inputs: dict[str, Node] = {}
        self._constants: dict[float, Node] = {}
        self._shared: dict[tuple[Operation, Node, Node], Node] = {}
        self._residues: list[int] = []
        self.zero = self.node(0.0)
        self.one = self.node(1.0)

    def input(self, name: str) -> Node:
        """The node that holds a named value."""
        node = self.inputs.get(name)
        if node is None:
            node = self.inputs[name] = Node(self, None, ())
        return node

    def node(self, value: Node | float) -> Node:
        """The node of a constant; a node is returned as it is."""
        if isinstance(value, Node):
            return value
        number = float(value)
        node = self._constants.get(number)
        if node is None:
            node = self._constants[number] = Node(self, None, ())
            node.constant = number
        return node

    def _share(self, operation: Operation, left: Node, right: Node) -> Node:
        if left.constant is not None and right.constant is not None:
            return self.node(operation(left.constant, right.constant))
        key = (operation, left, right)
        node = self._shared.get(key)
        if node is None:
            node = self._shared[key] = Node(self, operation, (left, right))
        return node

    def _negated(self, node: Node) -> Node | None:
        """What `node` is the negative of, if it is written as one."""
        if node.operation is SUBTRACT and node.arguments[0] is self.zero:
            return node.arguments[1]
        return None

    def add(self, left: Node, right: Node) -> Node:
        """Write left + right."""
        if left is self.zero:
            return right
        if right is self.zero:
            return left
        if (inner := self._negated(right)) is not None:
            return self.subtract(left, inner)
        if (inner := self._negated(left)) is not None:
            return self.subtract(right, inner)
        if left.index > right.index:
            left, right = right, left
        return self._share(ADD, left, right)

    def subtract(self, left: Node, right: Node) -> Node:
        """Write left - right."""
        if right is self.zero:
            return left
        if left is right:
            return self.zero
        if (inner := self._negated(right)) is not None:
            return self.add(left, inner)
        return self._share(SUBTRACT, left, right)

    def negate(self, node: Node) -> Node:
        """Write -node."""
        if node.operation is SUBTRACT:
            return self.subtract(node.arguments[1], node.arguments[0])
        return self.subtract(self.zero, node)

    def multiply(self, left: Node, right: Node) -> Node:
        """Write left × right."""
        if left is self.one:
            return right
        if right is self.one:
            return left
        if left is self.zero or right is self.zero:
            return self.zero
        if (inner := self._negated(left)) is not None:
            return self.negate(self.multiply(inner, right))
        if (inner := self._negated(right)) is not None:
            return self.negate(self.multiply(left, inner))
        if left.index > right.index:
            left, right = right, left
        return self._share(MULTIPLY, left, right)

    def divide(self, left: Node, right: Node) -> Node:
        """Write left / right."""
        if right is self.one or left is self.zero:
            return left
        return self._share(DIVIDE, left, right)

    def is_zero(self, node: Node) -> bool:
        """Whether a node is zero for all inputs, found at one random point of a prime field."""
        residues = self._residues
        for later in self.nodes[len(residues) :]:
            residues.append(self._residue(later))
        return residues[node.index] == 0

    def _residue(self, node: Node) -> int:
        if node.operation is None:
            if node.constant is not None:
                above, below = node.constant.as_integer_ratio()
                return above * pow(below, -1, PRIME) % PRIME
            return int.from_bytes(blake2b(str(node.index).encode(), digest_size=16).digest()) % PRIME
        left, right = (self._residues[argument.index] for argument in node.arguments)
        if node.operation is DIVIDE:
            return left * pow(right, -1, PRIME) % PRIME
        return int(node.operation(left, right)) % PRIME


class Values(Mapping[str, Node]):
    """Hands out the input nodes of a program by name, so that a value's expression writes the program."""

    def __init__(self, program: Program) -> None:
        self._program = program

    def __getitem__(self, name: str) -> Node:
        return self._program.input(name)

    def __iter__(self) -> Iterator[str]:
        return iter(self._program.inputs)

    def __len__(self) -> int:
        return len(self._program.inputs)
