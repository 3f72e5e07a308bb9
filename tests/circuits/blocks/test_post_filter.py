"""Filter behind the amplifier: the band of both together, decks, drawings, what is told and refused."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest

from opto_ckt.analyses import response
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from opto_ckt.result import Result
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
FORMS = {
    "rc": "order = 1",
    "active": "order = 2",
    "flat ladder": 'order = 3, response = "flat"',
    "even ladder": "order = 4",
    "long ladder": "order = 5",
    "two sections": 'order = 4, kind = "active"',
}


def filtered(form: str, *changes: tuple[str, str]) -> Result:
    table = f'[blocks]\npost_filter = {{ cutoff = "7 MHz", {FORMS[form]} }}'
    looser = (("bandwidth ", 'bandwidth = { min = "5 MHz" }'), ("peaking ", 'peaking = { max = "1.5 dB" }'))
    return sized("tia", *looser, ("", table), *changes)


@pytest.mark.parametrize("form", FORMS)
def test_receiver_and_filter_together_have_the_band_at_exact_values(form: str) -> None:
    result = filtered(form)
    bandwidth = next(row for row in result.roundings if row.figure == "bandwidth")
    assert bandwidth.exact == pytest.approx(7e6, rel=5e-3)


@pytest.mark.parametrize("form", FORMS)
def test_every_requirement_is_met_and_noise_falls(form: str) -> None:
    result = filtered(form)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert result.figure("sensitivity").nominal < 0.6 * sized("tia").figure("sensitivity").nominal


@pytest.mark.parametrize("form", FORMS)
def test_the_drawing_joins_what_the_topology_joins(form: str) -> None:
    assert drawing_faults(filtered(form).topology) == []


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("form", ["active", "even ladder"])
def test_decks_agree(form: str, engine: str) -> None:
    assert [row for row in crosscheck(filtered(form), engine) if not row.ok] == []


def test_a_ladder_alone_has_the_response_of_its_polynomial() -> None:
    """A receiver far faster than the filter, coils without loss: half power where the filter has it, no peaking."""
    found = model("tia", ("", '[blocks]\npost_filter = { order = 3, cutoff = "20 kHz", response = "flat" }'))
    corner, resistance = 20e3, 200.0
    unit = {"C20": 0.5, "L20": 4 / 3, "C21": 1.5}
    parts = {
        ref: g / (2 * np.pi * corner) * (resistance if ref[0] == "L" else 1 / resistance) for ref, g in unit.items()
    }
    chosen = {"R1": 20e3, "C1": 0.8e-12, "C8": 1e-7, "C9": 1e-7, "R20": resistance, **parts}
    biased = {**found.biased(found.nominal() | chosen), "L20.resistance": 1e-6, "U1.output_resistance": 1e-6}
    evaluation = found.evaluation(biased)
    assert response.bandwidth(evaluation)[0] == pytest.approx(corner, rel=1e-3)
    at = abs(response.transfer_at(evaluation, 2 * corner)[0] / response.dc_gain(evaluation)[0])
    assert at == pytest.approx(1 / np.sqrt(1 + 2**6), rel=1e-3)


def test_the_filter_for_masks_is_told_apart() -> None:
    at = '[blocks]\npost_filter = { order = 4, cutoff = "7.5 MHz" }'
    looser = (("bandwidth ", 'bandwidth = { min = "5 MHz" }'), ("peaking ", 'peaking = { max = "1.5 dB" }'))
    assert any("what eyes are measured through" in caution for caution in sized("tia", *looser, ("", at)).cautions)


def test_a_band_off_the_bit_rate_is_said() -> None:
    at = '[blocks]\npost_filter = { order = 1, cutoff = "12 MHz" }'
    assert any("times the bit rate" in caution for caution in sized("tia", ("", at)).cautions)


def test_a_receiver_slower_than_the_filter_is_refused_with_what_it_reaches() -> None:
    at = '[fixed]\nR1 = "200 kΩ"\n[blocks]\npost_filter = { order = 2, cutoff = "20 MHz" }'
    dim = (("power ", 'power = { typ = "0.2 µW", max = "2 µW" }'), ("ambient ", 'ambient = "0.1 µA"'))
    with pytest.raises(InfeasibleError, match="together reach") as refused:
        sized("tia", *dim, ("", at))
    assert any("cutoff ≤" in remedy for remedy in refused.value.remedies)


@pytest.mark.parametrize(
    ("form", "told"),
    [
        ('order = 2, kind = "rc"', "an rc filter is of order 1"),
        ('order = 3, kind = "active"', "made of pairs"),
        ('order = 1, kind = "ladder"', "of order 2 at least"),
        ("order = 6", "order"),
    ],
)
def test_orders_that_a_kind_does_not_have_are_refused(form: str, told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia", ("", f'[blocks]\npost_filter = {{ cutoff = "7 MHz", {form} }}'))
    assert told in str(refused.value)
