"""Blocks that a receiver may be fitted with, one table each; one that is left out is not fitted."""

from __future__ import annotations

from typing import Annotated

from opto_ckt.parts.record import Table, Unit, Whole


class PostFilter(Table):
    """Low-pass behind the amplifier."""

    order: Annotated[int, Whole(1, 4)] = 2
    cutoff: Annotated[float, Unit("Hz", "7.5 MHz")]


class ReceiverBlocks(Table):
    """Blocks that are fitted; one that is left out is not."""

    post_filter: PostFilter | None = None
