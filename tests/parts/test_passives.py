from __future__ import annotations

import numpy as np

from opto_ckt.parts.passives import ThermistorData
from tests.near import near


def test_thermistor_by_its_b_value():
    part = ThermistorData.model_validate({"resistance": "10 kΩ", "beta": "3950 K"})
    assert part.resistance_at(298.15) == near(10e3)
    expected = 10e3 * np.exp(3950 * (1 / 358.15 - 1 / 298.15))
    assert part.resistance_at(np.array([358.15])) == near(np.array([expected]))


def test_thermistor_through_points_goes_on_with_the_b_value_of_its_ends():
    law = ThermistorData.model_validate({"resistance": "10 kΩ", "beta": "3950 K"})
    points = [
        {"temperature": f"{celsius} °C", "resistance": f"{float(law.resistance_at(celsius + 273.15))!r} Ω"}
        for celsius in (0, 50)
    ]
    listed = ThermistorData.model_validate({"resistance_points": points})
    for kelvin in (253.15, 273.15, 298.15, 323.15, 373.15):
        assert listed.resistance_at(kelvin) == near(law.resistance_at(kelvin))
