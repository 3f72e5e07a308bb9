"""Polynomials whose coefficients are nodes of a program, lowest order first; the empty tuple is zero."""

from __future__ import annotations

from opto_ckt.analyses.network.program import Node

Polynomial = tuple[Node, ...]


def sum_of(left: Polynomial, right: Polynomial) -> Polynomial:
    """Write left + right."""
    if len(left) < len(right):
        left, right = right, left
    return tuple([a + b for a, b in zip(left, right, strict=False)]) + left[len(right) :]


def negative_of(polynomial: Polynomial) -> Polynomial:
    """Write -polynomial."""
    return tuple([-term for term in polynomial])


def difference_of(left: Polynomial, right: Polynomial) -> Polynomial:
    """Write left - right."""
    common = tuple([a - b for a, b in zip(left, right, strict=False)])
    return common + left[len(right) :] + negative_of(right[len(left) :])


def product_of(left: Polynomial, right: Polynomial) -> Polynomial:
    """Write left × right."""
    if not left or not right:
        return ()
    zero = left[0].program.zero
    result = [zero] * (len(left) + len(right) - 1)
    for position, factor in enumerate(left):
        if factor is not zero:
            for offset, term in enumerate(right):
                if term is not zero:
                    result[position + offset] = result[position + offset] + factor * term
    return tuple(result)


def squared_magnitude_of(polynomial: Polynomial) -> Polynomial:
    """Write |p(jω)|² as a polynomial in x = ω², from the squares of the even and the odd part."""
    if not polynomial:
        return ()
    even, odd = _alternating(polynomial[0::2]), _alternating(polynomial[1::2])
    zero = polynomial[0].program.zero
    return sum_of(_square_of(even), (zero, *_square_of(odd)) if odd else ())


def _alternating(part: Polynomial) -> Polynomial:
    return tuple([-term if position % 2 else term for position, term in enumerate(part)])


def _square_of(polynomial: Polynomial) -> Polynomial:
    zero = polynomial[0].program.zero
    result = [zero] * (2 * len(polynomial) - 1)
    for position, term in enumerate(polynomial):
        cross = zero
        result[2 * position] = result[2 * position] + term * term
        for offset in range(position + 1, len(polynomial)):
            cross = term * polynomial[offset]
            result[position + offset] = result[position + offset] + (cross + cross)
    return tuple(result)
