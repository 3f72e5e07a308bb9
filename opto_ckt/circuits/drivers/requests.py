"""Requests of the drivers whose current an op amp holds."""

from __future__ import annotations

from opto_ckt.request.driver import LaserDriverRequest
from opto_ckt.request.led_linear import LedLinearRequest

LoopRequest = LaserDriverRequest | LedLinearRequest
