from __future__ import annotations

import inspect
import pkgutil
from importlib import import_module

import numpy as np
import pytest
import sympy

import opto_ckt.formulas
from opto_ckt.analyses import response, stability, symbolic
from opto_ckt.analyses.network import Network
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, LIGHT_SPEED, PLANCK
from opto_ckt.formulas.formula import source_of
from opto_ckt.formulas.noise import thermal_voltage_noise
from tests.analyses.networks import RECEIVER, lane, loop_of_poles, low_pass, receiver, resonator, scattered

FREQUENCIES = np.array([1e2, 1e5, 2e6, 3e7, 1e9])


def numeric(expression, values):
    """A function of s from an expression of s and named values."""
    known = {sympy.Symbol(name, positive=True): value for name, value in values.items()}
    return sympy.lambdify(symbolic.S, expression.subs(known), "mpmath")


def test_lcapy_agrees_with_the_engine():
    values = lane(scattered(RECEIVER, 1, 11), 0)
    evaluation = Network(receiver()).evaluate(values)
    found = response.transfer_at(evaluation, FREQUENCIES[:, None])[:, 0]
    assert found == pytest.approx(symbolic.lcapy_transfer(receiver(), values, FREQUENCIES), rel=1e-6)


def test_lcapy_has_the_signs_of_spice():
    values = {"gain": 100.0}
    found = symbolic.lcapy_transfer(loop_of_poles(2), values, np.array([0.01]))
    evaluation = Network(loop_of_poles(2)).evaluate(values)
    assert found == pytest.approx(response.transfer_at(evaluation, 0.01), rel=1e-12)
    resonance = {"R": 3.0, "L": 1e-6, "C": 1e-9, "corner": 0.0}
    found = symbolic.lcapy_transfer(resonator(), resonance, np.array([1e6]))
    assert found == pytest.approx(response.transfer_at(Network(resonator()).evaluate(resonance), 1e6), rel=1e-12)


def test_lcapy_takes_symbols():
    circuit, number = symbolic.lcapy_circuit(low_pass(), {"R": sympy.Symbol("R"), "C": sympy.Symbol("C")})
    transfer = circuit.transimpedance(number["in"], "0", number["buffered1"], "0").sympy
    (s,) = [symbol for symbol in transfer.free_symbols if symbol.name == "s"]
    resistance, capacitance = (next(x for x in transfer.free_symbols if x.name == name) for name in "RC")
    assert sympy.simplify(transfer - 1 / (1 + s * resistance * capacitance)) == 0


@pytest.mark.parametrize("seed", range(2))
def test_symbolic_functions_agree_with_the_engine(seed):
    values = scattered(RECEIVER, 1, seed)
    evaluation = Network(receiver()).evaluate(values)
    network = symbolic.SymbolicNetwork(receiver())
    transfer = numeric(network.transfer(), lane(values, 0))
    ratio = numeric(network.return_ratio(), lane(values, 0))
    for frequency in FREQUENCIES:
        s = 2j * np.pi * frequency
        assert complex(transfer(s)) == pytest.approx(response.transfer_at(evaluation, frequency)[0], rel=1e-9)
        assert complex(ratio(s)) == pytest.approx(stability.return_ratio_at(evaluation, frequency)[0], rel=1e-9)


def test_symbolic_noise_transfer_agrees_with_the_engine():
    evaluation = Network(receiver()).evaluate(RECEIVER)
    generators = evaluation.generators
    network = symbolic.SymbolicNetwork(receiver())
    nodes = ("sum", "amp")
    transfer = numeric(network.transfer_from(nodes), RECEIVER)
    number = [generator.nodes for generator in receiver().generators].index(nodes)
    density = receiver().generators[number].density(RECEIVER)
    for frequency in FREQUENCIES:
        x = (2 * np.pi * frequency / evaluation.frequency_scale) ** 2
        above, below = (
            np.polyval(power[::-1, 0], x) for power in (generators.white[number], evaluation.denominator_power)
        )
        expected = density * abs(complex(transfer(2j * np.pi * frequency))) ** 2
        assert above / below == pytest.approx(expected, rel=1e-9)


def test_symbolic_transfer_is_readable():
    transfer = symbolic.symbolic_transfer(low_pass())
    resistance, capacitance = sympy.symbols("R C", positive=True)
    assert sympy.simplify(transfer - 1 / (1 + symbolic.S * resistance * capacitance)) == 0
    assert symbolic.readable(transfer) == "1/(C·R·s + 1)"
    assert symbolic.latex(transfer, {"R": "R_1"}) == r"\frac{1}{C R_1 s + 1}"


def test_return_ratio_of_equal_poles():
    gain = sympy.Symbol("gain", positive=True)
    ratio = symbolic.symbolic_return_ratio(loop_of_poles(3))
    assert sympy.simplify(ratio - gain / (1 + symbolic.S) ** 3) == 0


def formulas():
    """Every closed form of the package that names its source."""
    for module in pkgutil.iter_modules(opto_ckt.formulas.__path__):
        found = import_module(f"opto_ckt.formulas.{module.name}")
        for name, function in inspect.getmembers(found, inspect.isfunction):
            if source_of(function) and function.__module__ == found.__name__:
                yield pytest.param(function, id=f"{module.name}.{name}")


CONSTANTS = {"q": ELEMENTARY_CHARGE, "k": BOLTZMANN, "h": PLANCK, "c": LIGHT_SPEED}


@pytest.mark.parametrize("formula", list(formulas()))
def test_printed_formula_is_the_computed_one(formula):
    names = inspect.signature(formula).parameters
    expression = symbolic.formula_expression(formula)
    assert {symbol.name for symbol in expression.free_symbols} <= set(names) | set(CONSTANTS)
    assert symbolic.latex(expression)
    assert symbolic.readable(expression)
    agreed = 0
    generator = np.random.default_rng(0)
    for _ in range(40):
        values = dict(zip(names, 10 ** generator.uniform(-1, 1, len(names)), strict=True))
        with np.errstate(all="ignore"):
            computed = float(formula(**values))
        if np.isfinite(computed):
            known = {sympy.Symbol(name, positive=True): value for name, value in (CONSTANTS | values).items()}
            printed = complex(expression.subs(known).evalf(30))
            assert printed == pytest.approx(computed, rel=1e-6, abs=1e-300)
            agreed += 1
        if agreed == 3:
            break


def test_only_plain_functions_are_printed():
    with pytest.raises(TypeError, match="not a plain function"):
        symbolic.formula_expression(np.sqrt)


def test_constants_are_printed_by_their_symbols():
    expression = symbolic.formula_expression(thermal_voltage_noise)
    assert symbolic.readable(expression) == "2·sqrt(k)·sqrt(resistance)·sqrt(temperature)"
    assert symbolic.latex(expression, {"resistance": "R", "temperature": "T"}) == r"2 \sqrt{k} \sqrt{R} \sqrt{T}"
