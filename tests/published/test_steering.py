"""Printed figures of steered lasers: coupling network, lead inductance, headroom, compensation of the modulation."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.signal import lti, step

from opto_ckt.formulas.laser_temperature import linear_slope
from opto_ckt.formulas.steering import (
    bias_inductance,
    coupled_bias,
    coupled_droop,
    coupling_for_no_ringing,
    direct_bias,
    largest_damping,
    lead_voltage,
    pull_up_share,
)
from tests.near import near
from tests.published.printed import printed


def test_max3869_coupling_network():
    """Maxim, MAX3869 data sheet p. 10: 100 bits at 2.5 Gbit/s, 12 % of the average: 7.8 runs, 7.8 µH with 25 Ω.

    Its 56 nF are the 50 nF at which nothing rings, rounded up; together they droop by 12.2 %.
    """
    inductance = bias_inductance(resistance=25.0, duration=40e-9, droop=0.12)
    assert inductance / 25.0 / 40e-9 == printed("7.8")
    assert inductance == printed("7.8e-6")
    assert coupling_for_no_ringing(inductance=7.8e-6, resistance=25.0) == printed("50e-9")
    both = coupled_droop(inductance=7.8226e-6, coupling_capacitance=56e-9, resistance=25.0, duration=40e-9)
    assert both == printed("0.122")


def test_max3863_coupling_network():
    """Maxim, MAX3863 data sheet p. 9: 32.8 µH for 3 %; it prints 35 µH, its 2 µH and 33 µH together."""
    assert bias_inductance(resistance=25.0, duration=40e-9, droop=0.03) == near(32.8308e-6, rel=1e-4)


@pytest.mark.parametrize("capacitance", [56e-9, 100e-9, 1e-6])
def test_droop_of_both_agrees_with_another_road(capacitance):
    inductance, resistance, duration = 7.8e-6, 25.0, 100e-9
    system = lti([inductance * capacitance, 0, 0], [inductance * capacitance, resistance * capacitance, 1])
    _, level = step(system, T=np.linspace(0, duration, 2001))
    found = coupled_droop(
        inductance=inductance, coupling_capacitance=capacitance, resistance=resistance, duration=duration
    )
    assert found == near(1 - level[-1], rel=1e-4)


def test_sy84782u_application_note():
    """Microchip, SY84782U: 0.525 V over 1 nH, 11.4 Ω at the most (7.1), two thirds past a double pull-up (7.2)."""
    assert lead_voltage(inductance=1e-9, swing=42e-3, edge=80e-12) == printed("0.525")
    assert largest_damping(supply=3.0, laser=1.6, driver=0.6, modulation=70e-3) == printed("11.4")
    assert pull_up_share(pull_up=2.0, load=1.0) == near(2 / 3)


def test_onet4211_modulation_set():
    """Texas Instruments, ONET4211LD data sheet SLLS688A p. 19: 6.3 kΩ and 6.8 kΩ of its own constants."""
    warm = linear_slope(
        slope=265 / 36.3e-3, junction_temperature=298.15, reference_temperature=333.15, slope_coefficient=4e-3
    )
    assert warm == printed("6.3e3")
    assert printed("6.8e3") == 24 / (4.167e-3 - 0.63e-3)


def test_biases_lie_half_the_modulation_apart():
    """At a mark density of one half: 1 mW and 8.2 dB (6.6), 0.05 W/A."""
    zero, average, slope = 2e-3 / 7.6, 1e-3, 0.05
    direct = direct_bias(threshold=10e-3, zero_power=zero, slope=slope)
    coupled = coupled_bias(threshold=10e-3, average_power=average, slope=slope)
    modulation = 2e-3 * (6.6 - 1) / (slope * 7.6)
    assert coupled - direct == near(modulation / 2)
