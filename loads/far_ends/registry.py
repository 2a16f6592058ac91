"""How every kind of far end behaves; a new one is a file here, a file in ``parts/far_ends`` and a line in each list."""

from __future__ import annotations

from collections.abc import Mapping

from loads.far_ends import chain, rope, tie, webbing
from loads.far_ends.behaviour import Behaviour
from loads.linkage import Linkage
from parts.design import Design

BEHAVIOURS: Mapping[str, Behaviour] = {
    "chain": chain.BEHAVIOUR,
    "rope": rope.BEHAVIOUR,
    "webbing": webbing.BEHAVIOUR,
    "tie": tie.BEHAVIOUR,
}


def behaviour(design: Design) -> Behaviour:
    return BEHAVIOURS[design.far_end.table]


def linkage_of(design: Design) -> Linkage:
    """The machine of one design, without the friction that needs pin sizes."""
    return behaviour(design).linkage(design)
