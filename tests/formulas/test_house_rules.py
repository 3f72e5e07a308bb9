"""Every formula is keyword-only, told with units, equation and source, and one path for numbers, arrays and symbols."""

from __future__ import annotations

import importlib
import inspect
import math
import pkgutil
import re
import types

import numpy as np
import pytest
import sympy

import opto_ckt.formulas
from opto_ckt.formulas.formula import source_of

MODULES = [
    importlib.import_module(f"opto_ckt.formulas.{found.name}")
    for found in pkgutil.iter_modules(opto_ckt.formulas.__path__)
    if found.name != "formula"
]
PUBLIC = [
    function
    for module in MODULES
    for name, function in vars(module).items()
    if inspect.isfunction(function) and function.__module__ == module.__name__ and not name.startswith("_")
]
FORMULAS = [function for function in PUBLIC if "source" in vars(function)]

BY_UNIT = {
    "Ω": 1e3,
    "F": 10e-12,
    "H": 10e-6,
    "Hz": 1e6,
    "A": 10e-3,
    "V": 1.0,
    "W": 1e-3,
    "K": 300.0,
    "s": 1e-9,
    "1": 0.7,
    "V/V": 100.0,
    "V/K": -2e-3,
    "W/W": 8.0,
    "A/W": 0.8,
    "W/A": 0.3,
    "A/V": 0.1,
    "V/√Hz": 5e-9,
    "A/√Hz": 1e-12,
    "W/√Hz": 1e-13,
    "K/W": 20.0,
    "dB": 1.5,
    "m": 1e-6,
    "m²": 1e-6,
    "m³": 4.5e-16,
    "m/K": 4e-10,
    "V²/Hz": 1e-16,
    "J": 1.8e-19,
    "C": 2e-9,
    "F/m": 1e-10,
    "1/m³": 5e21,
    "m/s": 1e5,
    "m²/s": 1e-3,
    "1/m": 1e5,
    "1/s": 8e9,
    "m³/s": 8e-17,
    "A/m²": 1e7,
    "W/m²": 3e5,
    "1/Hz": 1e-15,
    "1/K": -4e-3,
    "1/K²": 1e-4,
    "W/A²": -5e-3,
}
BY_NAME = {  # where an equation holds only for figures that suit one another
    "allowed": 15.0,
    "bandwidth": 1e5,
    "case_to_sink": 0.5,
    "coupling_capacitance": 1e-9,
    "dark_current": 1e-9,
    "error": 0.3,
    "error_ratio": 1e-9,
    "feedback_resistance": 100e3,
    "first_temperature": 280.0,
    "gain": 10.0,
    "gain_bandwidth": 1e9,
    "high": 1e7,
    "high_current": 30e-3,
    "larger_current": 20e-3,
    "larger_power": 1.8e-3,
    "high_gain": 500.0,
    "junction_limit": 400.0,
    "junction_to_case": 1.0,
    "low": 10.0,
    "low_current": 1e-3,
    "safe": 0.4,
    "plateau": 0.4,
    "safe_voltage": 0.4,
    "second_slope": 0.25,
    "second_threshold": 12e-3,
    "stated_current": 20e-3,
    "supply": 5.0,
    "surface_current": 1e-9,
    "tap_voltage": 0.4,
    "thermal_noise": 3e-7,
    "threshold": 5e-3,
    "total": 300.0,
    "zero": 430.0,
}


def named(function):
    return f"{function.__module__.rpartition('.')[2]}.{function.__name__}"


def told(function):
    """Unit by parameter, as the docstring tells, and the unit of the result."""
    text = inspect.getdoc(function)
    before, _, after = text.partition("Returns\n-------\n")
    _, _, parameters = before.partition("Parameters\n----------\n")
    units = dict(re.findall(r"^(\w+) : .*?\[(\S+)\]$", parameters, re.MULTILINE))
    result, _, _ = after.partition("\n\n")
    found = re.search(r"\[(\S+)\]$", result)
    return units, found and found.group(1)


def sample(function):
    units, _ = told(function)
    return {name: BY_NAME.get(name, BY_UNIT[unit]) for name, unit in units.items()}


def test_there_are_formulas():
    assert len(FORMULAS) > 100


@pytest.mark.parametrize("function", PUBLIC, ids=named)
def test_parameters_are_keyword_only_unless_alone(function):
    parameters = list(inspect.signature(function).parameters.values())
    assert len(parameters) == 1 or all(parameter.kind is parameter.KEYWORD_ONLY for parameter in parameters)


@pytest.mark.parametrize("function", FORMULAS, ids=named)
def test_formula_is_keyword_only_without_defaults(function):
    parameters = inspect.signature(function).parameters.values()
    assert all(p.kind is p.KEYWORD_ONLY and p.default is p.empty for p in parameters)


@pytest.mark.parametrize("function", FORMULAS, ids=named)
def test_docstring_tells_equation_units_validity_and_source(function):
    units, result = told(function)
    text = inspect.getdoc(function)
    assert list(units) == list(inspect.signature(function).parameters)
    assert result
    assert ".. math::" in text
    assert "Notes\n-----\n" in text
    assert source_of(function).strip()


@pytest.mark.parametrize("function", FORMULAS, ids=named)
def test_arrays_give_what_numbers_give(function):
    low = sample(function)
    high = {name: value * 1.01 for name, value in low.items()}
    lanes = function(**{name: np.array([low[name], high[name]]) for name in low})
    singly = [function(**low), function(**high)]
    assert np.all(np.isfinite(singly))
    np.testing.assert_allclose(np.broadcast_to(lanes, 2), singly, rtol=1e-12)


@pytest.mark.parametrize("function", FORMULAS, ids=named)
def test_symbols_give_what_numbers_give(function):
    """The body is arithmetic, five functions and constants: what is printed is what is computed."""
    names = {"sqrt": sympy.sqrt, "exp": sympy.exp, "log": sympy.log, "arctan": sympy.atan, "pi": sympy.pi}
    used = set(function.__code__.co_names)
    constants = {name: value for name, value in function.__globals__.items() if name.isupper() and name in used}
    assert used <= names.keys() | constants.keys()
    assert all(isinstance(value, float) for value in constants.values())
    symbolic = types.FunctionType(function.__code__, names | constants)
    symbolic.__kwdefaults__ = function.__kwdefaults__
    values = sample(function)
    symbols = {name: sympy.Symbol(name, positive=True) for name in values}
    expression = symbolic(**symbols)
    number = float(expression.subs({symbols[name]: value for name, value in values.items()}).evalf())
    assert math.isclose(number, float(function(**values)), rel_tol=1e-9)
