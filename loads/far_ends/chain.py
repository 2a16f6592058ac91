"""A chain: its listed strength, what has to go together with it, how it runs over the sheave."""

from __future__ import annotations

import math

from loads.checks.context import COMMON, Context
from loads.far_ends import flexible
from loads.far_ends.behaviour import Behaviour
from loads.practice import source, value
from loads.records import Check
from parts.far_ends.chain import Chain


def least_running_diameter(chain: Chain) -> float:
    """Least diameter (mm) to the pitch line that a chain may run over.

    Leaf chain: five pitches. Roller chain: the pitch circle p/sin(π/z) of the smallest wheel it is led over.
    Source: leaf chain makers' design notes to ISO 4347; the wheel's least teeth are common practice.
    """
    if chain.kind == "leaf":
        return value("sheave", "leaf") * chain.pitch
    return chain.pitch / math.sin(math.pi / value("sheave", "roller_teeth"))


def checks(c: Context) -> list[Check]:
    """Strength, the chain's own pin, and the chain end's tongue or fingers between the plates; the sheave."""
    chain, end = c.design.far_end, c.sizes.chain_end
    assert isinstance(chain, Chain)
    listed = chain.source + ("" if chain.confirmed else " (from memory, confirm with the maker's certificate)")
    rows = [
        flexible.strength(c, "least tensile strength over tension with shock"),
        c.shape_check(
            "chain_end", "chain_hole", "chain's own pin passes", end.pin_diameter, chain.pin_diameter, "mm",
            "pin through the chain no thicker than the chain's own", listed,
        ),
        c.shape_check(
            "chain_end", "chain_hole", "chain's own pin is not loose", chain.pin_diameter, end.pin_diameter * 1.05, "mm",
            "pin through the chain no more than 5 % thinner than the chain's own", COMMON,
        ),
        c.shape_check(
            "chain_end", "tongue", "tongue fits the chain", end.tongue_width, chain.tongue_width, "mm",
            "tongue or finger no wider than the room between the plates", listed,
        ),
    ]  # fmt: skip
    if end.slots:
        rows.append(
            c.shape_check(
                "chain_end", "slots", "slots clear the plates", chain.plate_height / 2.0,
                end.slot_depth - end.height / 2.0, "mm",
                "slots reach past the plates' ends, measured from the chain's own pin", COMMON,
            )
        )  # fmt: skip
    rows.append(flexible.clear_at_the_start(c, chain.pitch, "one pitch of chain"))
    how = "running diameter no less than the trade's least"
    return rows + flexible.sheave(c, least_running_diameter(chain), how, source("sheave"))


BEHAVIOUR = Behaviour(flexible.linkage, flexible.sites("chain"), flexible.problems, checks)
