"""Printed figures of photodiodes and avalanche photodiodes."""

from __future__ import annotations

from math import log10

import pytest

from opto_ckt.constants import ELEMENTARY_CHARGE
from opto_ckt.formulas.avalanche import avalanche_gain, excess_noise_factor, optimum_gain
from opto_ckt.formulas.decision import sensitivity
from opto_ckt.formulas.leakage import diffusion_doubling, generation_doubling
from opto_ckt.formulas.photodiode import (
    MATERIALS,
    cutoff_wavelength,
    dark_nep,
    detectivity,
    junction_capacitance,
    photon_energy,
    responsivity,
    surface_reflection,
    zero_bias_capacitance,
)
from opto_ckt.formulas.transit import (
    absorbed_share,
    cautious_transit_frequency,
    corner_frequency,
    depleted_capacitance,
    depletion_width,
    transit_time,
)
from opto_ckt.parts.photodiode import PhotodiodeData, WavelengthError
from opto_ckt.parts.record import Spread
from tests.near import near
from tests.published.printed import printed


def test_senior_8_1_responsivity():
    """J. M. Senior, Optical Fiber Communications: Principles and Practice, Ex. 8.1 (p. 454)."""
    assert responsivity(quantum_efficiency=0.4, wavelength=0.85e-6) == printed("0.274")


def test_senior_8_2_wavelength_and_power():
    """Senior, Ex. 8.2 (p. 454); it rounds 1.324 µm down, and takes the power from the photon energy."""
    assert cutoff_wavelength(band_gap=1.5e-19) == printed("1.32e-6")
    power = 2.5e-6 / responsivity(quantum_efficiency=0.65, wavelength=cutoff_wavelength(band_gap=1.5e-19))
    assert power == printed("3.60e-6")


def test_keiser_6_4_responsivity_and_cutoff():
    """G. Keiser, Optical Fiber Communications, Ex. 6.4 (p. 227), with his 0.73 eV for InGaAs."""
    assert responsivity(quantum_efficiency=0.9, wavelength=1.3e-6) == printed("0.94")
    assert cutoff_wavelength(band_gap=0.73 * ELEMENTARY_CHARGE) == printed("1.7e-6")


def test_optical_seti_page_39_responsivity():
    """Optical SETI tutorial page 9008-039; it cuts 0.2645 off to 0.26."""
    assert responsivity(quantum_efficiency=0.5, wavelength=656e-9) == printed("0.26")


def test_kumar_deen_5_2_is_beyond_its_own_cutoff():
    """S. Kumar & M. J. Deen, Fiber Optic Communications, Ex. 5.2 (p. 198).

    The print is off: 0.9 A/W for η = 0.9 at 1.1 µm, where the formula gives 0.798 A/W and GaAs sees nothing; a record
    of such a diode refuses the wavelength.
    """
    assert responsivity(quantum_efficiency=0.9, wavelength=1.1e-6) == printed("0.798489")
    assert responsivity(quantum_efficiency=0.9, wavelength=1.1e-6) != printed("0.9")
    cutoff = cutoff_wavelength(band_gap=MATERIALS["GaAs"].band_gap)
    assert cutoff == printed("0.873e-6")
    assert cutoff < 1.1e-6
    diode = PhotodiodeData(
        material="GaAs", responsivity=Spread(typ=0.5), responsivity_wavelength=0.85e-6, reverse_voltage_max=20.0,
        capacitance=Spread(typ=2e-12), capacitance_bias=5.0, dark_current=Spread(typ=1e-9),
    )  # fmt: skip
    with pytest.raises(WavelengthError, match="beyond the cut-off of GaAs, 873"):
        diode.responsivity_at(1.1e-6)


def test_senior_8_4_capacitance_of_a_depleted_layer():
    """Senior, Ex. 8.4 (p. 463): transit time 200 ps.

    The capacitance as transcribed, 0.041 pF, is off by 100 (F/cm taken for F/m); 4.12 pF is exact.
    """
    area = 3.141592653589793 * (0.5e-3) ** 2
    capacitance = depleted_capacitance(permittivity=1.05e-10, area=area, width=20e-6)
    assert capacitance == printed("4.12334e-12")
    assert capacitance / 100 == printed("4.1e-14")
    assert transit_time(velocity=1e5, width=20e-6) == printed("2.00e-10")


def test_senior_8_5_cautious_transit():
    """Senior, Ex. 8.5 (p. 464): 5.2 ns; V. S. Bagad, Ex. 4.2.2 prints 5.24 ns."""
    response = 1 / cautious_transit_frequency(velocity=3e4, width=25e-6)
    assert response == printed("5.2e-9")
    assert response == printed("5.24e-9")


def test_wilson_hawkes_7_6_depletion_width():
    """J. Wilson & J. F. B. Hawkes, Optoelectronics, Ex. 7.6 (p. 329): width, and the light absorbed in it."""
    permittivity = 11.7 * 8.8541878128e-12
    width = depletion_width(permittivity=permittivity, voltage=100.0, doping=5e21)
    assert width == printed("5.09e-6")
    assert absorbed_share(absorption=1e5, width=width) == printed("0.399")


def test_gupta_5_30_bare_silicon():
    """S. C. Gupta, Ex. 5.30: n = 3.5 throws 31 % back."""
    assert surface_reflection(index=3.5, outside_index=1.0) == printed("0.31")


def test_senior_8_6_dark_nep_and_detectivity():
    """Senior, Ex. 8.6 (p. 470); D* is printed as 8.1e8, from the rounded NEP."""
    nep = dark_nep(dark_current=8e-9, responsivity=responsivity(quantum_efficiency=0.55, wavelength=1.3e-6))
    assert nep == printed("8.78e-14")
    assert detectivity(area=5e-9, noise_equivalent_power=nep) == printed("8.1e8")


def test_keiser_6_7_load_resistor():
    """Keiser, Ex. 6.7 (p. 239)."""
    assert corner_frequency(resistance=1e3, capacitance=7e-12) == printed("23e6")
    assert corner_frequency(resistance=50.0, capacitance=7e-12) == printed("455e6")


def test_dark_current_doubling():
    """The 10 K rule: Analog Devices AD795, AD549, AD645 data sheets; both slopes derived here for silicon at 300 K."""
    gap = MATERIALS["Si"].band_gap
    assert generation_doubling(band_gap=gap, temperature=300.0) == printed("10")
    assert generation_doubling(band_gap=gap, temperature=300.0) == printed("9.59959")
    assert diffusion_doubling(band_gap=gap, temperature=300.0) == printed("4.7998")


def test_spice_junction_capacitance():
    """SPICE junction law, run in ngspice 39: 50 pF, 0.6 V, 0.45 at 5 V."""
    law = {"reverse_bias": 5.0, "built_in_voltage": 0.6, "grading": 0.45}
    capacitance = junction_capacitance(zero_bias_capacitance=50e-12, **law)
    assert capacitance == printed("18.30e-12")
    assert zero_bias_capacitance(capacitance=capacitance, **law) == near(50e-12, rel=1e-12)


def test_photon_of_850_nm():
    """CODATA 2018 exact constants: energy in J and eV, responsivity at one electron a photon."""
    assert photon_energy(wavelength=850e-9) == printed("2.33700e-19")
    assert photon_energy(wavelength=850e-9) / ELEMENTARY_CHARGE == printed("1.45864")
    assert responsivity(quantum_efficiency=1.0, wavelength=850e-9) == printed("0.685571")


def test_senior_8_7_avalanche_gain():
    """Senior, Ex. 8.7 (p. 482); 37.89 is printed, 0.02 % above the exact figure."""
    r = responsivity(quantum_efficiency=0.8, wavelength=0.9e-6)
    assert r == printed("0.581")
    gain = avalanche_gain(current=11e-6, responsivity=r, power=0.5e-6)
    assert gain == near(37.89, rel=0.0003)
    assert gain == printed("37.8841")


def test_keiser_6_5_avalanche_gain():
    """Keiser, Ex. 6.5 (p. 230): 0.235 µA is cut off (0.4 %) and 43 rounded from it (2 %)."""
    r = responsivity(quantum_efficiency=0.65, wavelength=0.9e-6)
    gain = avalanche_gain(current=10e-6, responsivity=r, power=0.5e-6)
    assert r * 0.5e-6 == near(0.235e-6, rel=0.004)
    assert r * 0.5e-6 == printed("2.35917e-7")
    assert gain == near(43, rel=0.02)
    assert gain == printed("42.3878")


def test_mynbaev_11_3_3_excess_noise():
    """D. K. Mynbaev & L. L. Scheiner, Fiber-Optic Communications Technology, Ex. 11.3.3.

    The ionisation ratios 0.03 and 0.6 are inferred from the printed factors.
    """
    assert excess_noise_factor(gain=20.0, ionisation_ratio=0.03) == printed("2.49")
    assert excess_noise_factor(gain=20.0, ionisation_ratio=0.6) == printed("12.78")


def test_optimum_gain_of_an_ingaas_diode():
    """G. P. Agrawal, Fiber-Optic Communication Systems, 4.5, from memory; the figures are this project's own."""
    known = {"thermal_noise": 3e-7, "quality": 7.0345, "bandwidth": 1.8e9}
    gain = optimum_gain(**known, ionisation_ratio=0.5)
    assert gain == printed("17.1685")
    factor = excess_noise_factor(gain=gain, ionisation_ratio=0.5)
    power = sensitivity(**known, responsivity=0.9, extinction_ratio=1e15, gain=gain, excess_noise=factor)
    assert 10 * log10(power / 1e-3) == printed("-35.4047")
