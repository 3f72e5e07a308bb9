"""Blocks that a receiver may be fitted with, one table each; one that is left out is not fitted."""

from __future__ import annotations

from typing import Annotated

from opto_ckt.parts.record import Table, Unit, Whole


class PostFilter(Table):
    """Low-pass behind the amplifier."""

    order: Annotated[int, Whole(1, 4)] = 2
    cutoff: Annotated[float, Unit("Hz", "7.5 MHz")]


class GainStage(Table):
    """Voltage gain behind the first amplifier."""

    gain: Annotated[float | None, Unit("V/V", "10 V/V")] = None  #: else what require.transimpedance leaves for it


class ReceiverBlocks(Table):
    """Blocks that are fitted; one that is left out is not."""

    gain_stage: GainStage | None = None

    post_filter: PostFilter | None = None
