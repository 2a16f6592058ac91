"""Webbing: its least breaking force with sewn eyes, the fork about the eye with its pin, the sheave's least ratio."""

from __future__ import annotations

from loads.checks.context import COMMON, Context
from loads.far_ends import flexible
from loads.far_ends.behaviour import Behaviour
from loads.records import Check
from parts.far_ends.webbing import Webbing


def checks(c: Context) -> list[Check]:
    """Strength, the fork about the sewn eye with its pin, the sheave."""
    webbing, end = c.design.far_end, c.sizes.chain_end
    assert isinstance(webbing, Webbing)
    rows = [
        flexible.strength(c, "least breaking force of the sling with its eyes over tension with shock"),
        *flexible.fork_checks(c, webbing.width, end.pin_diameter + webbing.height),
        flexible.clear_at_the_start(
            c, 3.0 * (end.pin_diameter + webbing.height), "the sewn eye, about three pins long,"
        ),
    ]
    ratio = webbing.least_sheave_ratio
    how = f"sheave to the webbing's middle no less than {ratio:g} of its thicknesses"
    return rows + flexible.sheave(c, ratio * webbing.thickness, how, COMMON)


BEHAVIOUR = Behaviour(flexible.linkage, flexible.sites("webbing"), flexible.problems, checks)
