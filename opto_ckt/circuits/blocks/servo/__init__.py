"""Loop that takes the steady light away: an integrator drives a current into the summing node."""

from __future__ import annotations

from types import ModuleType
from typing import Any

from opto_ckt.circuit import Block, Refusal
from opto_ckt.circuits.blocks.servo import integrator, resistor, transistor
from opto_ckt.request import ReceiverRequest

FORMS: dict[str, ModuleType] = {"resistor": resistor, "transistor": transistor}
"""What injects the current, as under blocks.servo.injection -> module."""


def _form(request: ReceiverRequest) -> Any:
    asked = request.blocks.servo
    return FORMS["resistor" if asked is None else asked.injection]


def _refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    return integrator.refused(request) or _form(request).refused(request)


BLOCK = Block(
    name="servo",
    topology=lambda request: _form(request).topology(request),
    propose=lambda request, *rest: _form(request).propose(request, *rest),
    given=integrator.given,
    bias=lambda values, request: _form(request).bias(values, request),
    stresses=lambda values, request: _form(request).stresses(values, request),
    heat=lambda values, request: _form(request).heat(values, request),
    remarks=lambda values, limits, request: _form(request).remarks(values, limits, request),
    refused=_refused,
    formulas=(*integrator.FORMULAS, *transistor.FORMULAS),
)
