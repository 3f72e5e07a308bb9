from __future__ import annotations

import subprocess
import sys
from typing import Any

import pytest
from pydantic import ValidationError

from opto_ckt.parts.record import Assumed, FindingsError, Spread, Unit
from opto_ckt.request import LaserDriverRequest, ReceiverRequest, Request
from opto_ckt.request.reading import Limit, meant, read_assumed, read_fixed, read_limits, series_in
from opto_ckt.request.receiver import AmbientLight, ReceivedSignal, read_ambient
from opto_ckt.request.request import records_in, spread_fields
from opto_ckt.request.tables import Band, Conditions, Load, Preferred, Supply
from tests.design.designs import RECEIVER, read
from tests.near import near


def test_what_is_left_out_has_the_stated_value():
    conditions = Conditions(supply=Supply(positive=5.0))
    assert conditions.temperature == Spread(min=273.15, typ=298.15, max=323.15)
    assert (conditions.supply.negative, conditions.supply.tolerance, conditions.supply.total) == (0.0, 0.05, 5.0)
    preferred = Preferred()
    assert (preferred.resistors.series, preferred.resistors.tolerance, preferred.resistors.size) == (
        "E96",
        0.01,
        "0603",
    )
    assert (preferred.capacitors.dielectric, preferred.bypass.dielectric) == ("C0G", "X7R")
    assert Load() == Load(resistance=None, capacitance=0.0, coupling="dc")
    assert Band(max=1e6).min == 0.0


def test_temperature_without_a_typical_value_is_room_temperature_or_the_nearest():
    def typical(low: str, high: str) -> float:
        conditions = Conditions.model_validate(
            {"temperature": {"min": low, "max": high}, "supply": {"positive": "5 V"}}, context={"from_file": True}
        )
        return conditions.temperature.nominal

    assert typical("-20 °C", "60 °C") == 298.15
    assert typical("40 °C", "60 °C") == near(313.15)
    assert typical("-40 °C", "0 °C") == near(273.15)


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        ("1 µA", Spread(min=0.0, typ=1e-6, max=1e-6)),
        ({"typ": "1 µA", "max": "3 µA"}, Spread(typ=1e-6, max=3e-6)),
        ({"power": "-30 dBm", "wavelength": "850 nm"}, AmbientLight(Spread(min=0.0, typ=1e-6, max=1e-6), 850e-9)),
    ],
)
def test_background(value: Any, expected: Spread | AmbientLight):
    found = read_ambient(value, from_file=True)
    assert type(found) is type(expected)
    spreads = [one.power if isinstance(one, AmbientLight) else one for one in (found, expected)]
    assert (spreads[0].low, spreads[0].nominal, spreads[0].high) == pytest.approx(
        (spreads[1].low, spreads[1].nominal, spreads[1].high), rel=1e-9, abs=0.0
    )


def test_background_as_light_becomes_current_at_its_own_wavelength():
    text = RECEIVER.replace('"1 µA"', '{ power = "2 µW", wavelength = "655 nm" }')
    request = read(text).request
    assert isinstance(request, ReceiverRequest)
    assert request.ambient_current.high == near(2e-6 * 0.45)
    assert request.ambient_current.low == 0.0


@pytest.mark.parametrize(
    "value",
    [{"power": "1 µW"}, {"power": "1 V", "wavelength": "850 nm"}, {"power": "1 µW", "x": 1, "wavelength": "1 µm"}, 3],
)
def test_background_that_cannot_be_read(value: Any):
    with pytest.raises(FindingsError):
        read_ambient(value, from_file=True)


def test_limits_are_in_the_unit_of_the_figure():
    limits = read_limits(
        {
            "extinction_ratio": {"min": "9 dB"},
            "junction_temperature": {"max": "85 °C"},
            "sensitivity": {"max": "-30 dBm"},
        },
        from_file=True,
    )
    assert limits["extinction_ratio"].min == near(10**0.9)
    assert limits["junction_temperature"] == Limit(max=358.15)
    assert limits["sensitivity"].max == near(1e-6)
    with pytest.raises(FindingsError, match=r"min '9 V' is above max '8 V'"):
        read_limits({"output_swing": {"min": "9 V", "max": "8 V"}}, from_file=True)


def test_assumed_spread_is_even_or_has_two_sides():
    assert read_assumed({"a": "30 %", "b": {"high": "50 %"}}, from_file=True) == {
        "a": Assumed(0.3, 0.3),
        "b": Assumed(0.0, 0.5),
    }
    for wrong in ("30 V", "-3 %", {"up": "3 %"}, {"low": "120 %"}):
        with pytest.raises(FindingsError):
            read_assumed({"a": wrong}, from_file=True)


def test_fixed_values_have_the_unit_of_their_letter():
    fixed = read_fixed({"R1": "22 kΩ", "C12": "1p5", "L1": "10 µH", "CB": "1 pF"}, from_file=True)
    assert fixed == near({"R1": 22e3, "C12": 1.5e-12, "L1": 10e-6, "CB": 1e-12})
    for wrong in ("U1", "R", "R-1", "r1", ""):
        with pytest.raises(FindingsError):
            read_fixed({wrong: "1 Ω"}, from_file=True)


def test_a_series_is_a_name_or_a_drawer():
    reader = series_in(Unit("Ω", "10 kΩ")).function
    assert reader("E24", from_file=True) == "E24"
    assert reader(["22 kΩ", "10 kΩ", "10 kΩ"], from_file=True) == (10e3, 22e3)
    for wrong in ("E25", 3, [], ["-1 Ω"], [True]):
        with pytest.raises(FindingsError):
            reader(wrong, from_file=True)


def test_a_signal_is_a_link_or_a_band():
    def signal(**fields: Any) -> ReceivedSignal:
        return ReceivedSignal.model_validate({"wavelength": "850 nm", "power": "1 µW"} | fields)

    assert signal(bit_rate="1 Mbit/s").run_length == 72
    assert signal(bit_rate="1 Mbit/s").extinction_ratio == 10.0
    assert signal(band={"max": "1 MHz"}).band == Band(max=1e6)
    for wrong in (
        {},
        {"bit_rate": "1 Mbit/s", "band": {"max": "1 MHz"}},
        {"bit_rate": "1 Mbit/s", "mark_density": "100 %"},
    ):
        with pytest.raises(ValidationError):
            signal(**wrong)
    for wrong in ({"bit_error_ratio": 0.5}, {"extinction_ratio": 1.0}):
        with pytest.raises(ValidationError):
            signal(bit_rate="1 Mbit/s", **wrong)
    with pytest.raises(ValidationError, match="min is not below max"):
        Band(min=2.0, max=1.0)


def test_the_hint_is_the_nearest_word():
    assert meant("bandwith", ["bandwidth", "peaking"]) == "; did you mean 'bandwidth'?"
    assert meant("xyz", ["bandwidth", "peaking"]) == ""


def test_a_request_knows_which_parts_it_may_hold():
    transistors = records_in(LaserDriverRequest.model_fields["transistor"].annotation)
    assert [record.__name__ for record in transistors] == ["BipolarData", "MosfetData"]
    assert [record.__name__ for record in records_in(LaserDriverRequest.model_fields["diode"].annotation)] == [
        "DiodeData"
    ]
    assert records_in(ReceiverRequest.model_fields["signal"].annotation) == ()
    assert "voltage_noise" in spread_fields(records_in(ReceiverRequest.model_fields["amplifier"].annotation)[0])


def test_a_plain_request_has_no_parts():
    request = Request(circuit="x")
    assert (request.require, request.assumed, request.fixed, request.preferred) == ({}, {}, {}, Preferred())


def test_a_receiver_is_read_without_what_only_drivers_need():
    """Start-up: reading one kind of request loads neither the records of the other nor heavy libraries."""
    code = (
        "import sys; import opto_ckt.design.reading; from opto_ckt.request import ReceiverRequest; "
        "heavy = {'opto_ckt.parts.laser', 'opto_ckt.request.driver', 'scipy', 'sympy', 'lcapy', 'schemdraw'}; "
        "print(sorted(heavy & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_an_unknown_name_is_no_request():
    with pytest.raises(AttributeError, match="no attribute Other"):
        __import__("opto_ckt.request").request.Other  # noqa: B018 - looking it up is what is tested
