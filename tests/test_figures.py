from __future__ import annotations

from opto_ckt import figures
from opto_ckt.figures import FIGURES
from opto_ckt.units import known


def test_each_figure_has_a_known_unit_and_says_what_it_means():
    for name, figure in FIGURES.items():
        assert figure.name == name
        assert known(figure.unit), name
        assert figure.label
        assert figure.convention


def test_a_margin_can_be_measured_against_a_limit_of_zero():
    assert all(figure.scale > 0 for figure in FIGURES.values())
    assert FIGURES["peaking"].scale == 0.5
    assert FIGURES["phase_margin"].scale == 45.0


def test_names_are_each_given_once():
    assert len(FIGURES) == len(figures._ALL)
