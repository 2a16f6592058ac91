"""The chain against its listed least tensile strength, and what has to go together with it."""

from __future__ import annotations

from loads.checks.context import COMMON, Context, length_of
from loads.records import Check


def check(c: Context) -> list[Check]:
    """Strength, the chain's own pin, and the chain end's tongue or fingers between the plates."""
    chain, end = c.design.chain, c.sizes.chain_end
    tension = length_of(c.members.chain_on_pin)
    listed = chain.source + ("" if chain.confirmed else " (from memory, confirm with the maker's certificate)")
    rows = [
        c.worst_check(
            "chain",
            "strand",
            "tension",
            tension,
            chain.min_tensile_strength,
            "N",
            c.design.targets.chain,
            "least tensile strength over tension with shock",
            listed,
        ),
        c.shape_check(
            "chain_end",
            "chain_hole",
            "chain's own pin passes",
            end.pin_diameter,
            chain.pin_diameter,
            "mm",
            "pin through the chain no thicker than the chain's own",
            listed,
        ),
        c.shape_check(
            "chain_end",
            "chain_hole",
            "chain's own pin is not loose",
            chain.pin_diameter,
            end.pin_diameter * 1.05,
            "mm",
            "pin through the chain no more than 5 % thinner than the chain's own",
            COMMON,
        ),
        c.shape_check(
            "chain_end",
            "tongue",
            "tongue fits the chain",
            end.tongue_width,
            chain.tongue_width,
            "mm",
            "tongue or finger no wider than the room between the plates",
            listed,
        ),
    ]
    if end.slots:
        rows.append(
            c.shape_check(
                "chain_end",
                "slots",
                "slots clear the plates",
                chain.plate_height / 2.0,
                end.slot_depth - end.height / 2.0,
                "mm",
                "slots reach past the plates' ends, measured from the chain's own pin",
                COMMON,
            )
        )
    return rows
