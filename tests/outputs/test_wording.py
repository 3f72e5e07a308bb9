"""Corners in words."""

from __future__ import annotations

import pytest

from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.limits import Limit, Limits
from opto_ckt.outputs.wording import FIGURES, describe, labels_of
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.parts.photodiode import PhotodiodeData
from opto_ckt.topology import GROUND, Capacitor, Resistor, Supply, Topology

LIMITS: Limits = {
    "temperature": Limit(25 + ZERO_CELSIUS, -20 + ZERO_CELSIUS, 60 + ZERO_CELSIUS),
    "supply.positive": Limit(5.0, 4.75, 5.25),
    "supply.negative": Limit(-5.0, -5.25, -4.75),
}


def test_parts_by_their_short_words_and_temperature_itself():
    corner = {"U1.gain_bandwidth": "low", "D1.capacitance": "high", "temperature": "high"}
    assert describe(corner, LIMITS) == "U1 GBW low, D1 C high, 60 °C"


def test_chosen_parts_by_their_designator():
    corner = {"U1.gain_bandwidth": "high", "U1.second_pole": "low", "C1": "low"}
    assert describe(corner, LIMITS) == "U1 GBW high, U1 second pole low, C1 low"


@pytest.mark.parametrize(
    ("corner", "words"),
    [
        ({"signal.power": "high"}, "most light"),
        ({"signal.power": "low"}, "least light"),
        ({"signal.ambient": "low"}, "no ambient light"),
        ({"temperature": "low"}, "-20 °C"),
        ({"supply.positive": "low"}, "positive supply 4.75 V"),
        ({"supply.negative": "low"}, "negative supply -5.25 V"),
        ({"supply.bias": "low"}, "bias supply low"),
        ({}, "nominal"),
        ({"R1": "nominal"}, "nominal"),
    ],
)
def test_surroundings(corner, words):
    assert describe(corner, LIMITS) == words


def test_without_limits_words_stand_for_values():
    assert describe({"temperature": "low", "supply.positive": "high"}) == "coldest, positive supply high"


def test_a_figure_without_a_short_word_is_spelt_out():
    assert describe({"U1.swing_to_positive": "high"}) == "U1 swing to positive high"


def test_more_settings_than_are_shown_are_counted():
    corner = {f"R{i}": "high" for i in range(1, 8)}
    assert describe(corner) == "R1 high, R2 high, R3 high, R4 high and 3 more"


def test_parts_that_no_assembler_fits_are_explained():
    topology = Topology(
        elements=(
            Resistor("R1", "a", "b", role="feedback"),
            Capacitor("CS", "a", "b", role="stray across R1", fitted=False),
            Supply("VP", "positive", value="supply.positive"),
        ),
        input="R1",
        output=("b", GROUND),
    )
    labels = labels_of(topology)
    assert labels == {"CS": "CS (stray across R1)"}
    assert describe({"CS": "high", "R1": "low"}, labels=labels) == "CS (stray across R1) high, R1 low"


def test_short_words_belong_to_figures_of_records():
    """Op amps and photodiodes use theirs; the others belong to transistors and lasers."""
    fields = set(OpAmpData.model_fields) | set(PhotodiodeData.model_fields)
    others = {
        "current_gain", "input_capacitance", "monitor_responsivity", "on_resistance", "reverse_capacitance",
        "transconductance", "transition_frequency",
    }  # fmt: skip
    assert set(FIGURES) - fields == others
