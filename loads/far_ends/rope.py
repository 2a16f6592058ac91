"""A wire rope: its least breaking force by what the end carries of it, the fitting's pin, the sheave's least ratio."""

from __future__ import annotations

from loads.checks.context import Context
from loads.far_ends import flexible
from loads.far_ends.behaviour import Behaviour
from loads.records import Check
from parts.far_ends.rope import Rope

RATIO = "ISO 2408 leaves the ratio to the application; least ratios by construction, {}"


def checks(c: Context) -> list[Check]:
    """Strength, the fork about the fitting with its pin, the sheave."""
    rope, end = c.design.far_end, c.sizes.chain_end
    assert isinstance(rope, Rope)
    efficiency = rope.min_tensile_strength / rope.breaking_force
    how = f"least breaking force {rope.breaking_force:.4g} N by {efficiency:.3g} for the {rope.end.name}"
    rows = [
        flexible.strength(c, f"{how}, over tension with shock"),
        *flexible.fork_checks(c, rope.eye_width, rope.eye_height),
        c.shape_check(
            "rope_connecting_pin", "middle", "pin passes the fitting", end.pin_diameter, rope.eye_pin, "mm",
            f"pin no thicker than the {rope.end.name} takes", rope.end.source,
        ),
        flexible.clear_at_the_start(c, 2.0 * rope.eye_height, "the rope's fitting, about two eyes long,"),
    ]  # fmt: skip
    how = f"sheave to the rope's middle no less than {rope.least_sheave_ratio:g} rope diameters"
    whence = RATIO.format("from memory; confirm with the rope's maker")
    return rows + flexible.sheave(c, rope.least_sheave_ratio * rope.diameter, how, whence)


BEHAVIOUR = Behaviour(flexible.linkage, flexible.sites("rope"), flexible.problems, checks)
