"""The machine on its stop's back against the checks of the winding: the same families, with the reversed loads.

Its rows are those that bear a load; sizes and shapes are what they are. N, mm, MPa, rad.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np

from loads.checks import bearings, disc, eyes, far_end, link, pins, press, shaft, stop
from loads.checks.context import Context
from loads.cycle import Cycle
from loads.far_ends.registry import behaviour
from loads.linkage import Linkage
from loads.members import history, members, site_histories
from loads.records import Check
from parts.sizes import Sizes
from parts.stop_back import BackContact

REVERSED = "reversed"
FAMILIES: tuple[Callable[[Context], list[Check]], ...] = (
    far_end.check, pins.check, eyes.check, stop.check, press.check, disc.check, shaft.check, bearings.check,
)  # fmt: skip
EDGE = "the link's flank meets a corner of the block: nothing that could be rated bears there; a post has a round back"


def reversed_checks(c: Context, mirror: Linkage, figures: Cycle, contact: BackContact) -> tuple[Check, ...]:
    """Rows with the case "reversed", and how far the spring is drawn. ``mirror`` and ``figures`` are of that machine."""
    past = history(mirror, figures)
    far = behaviour(c.design).sites
    sites = site_histories(past, c.stack, c.design.targets, c.sizes.disc.bolt_circle / 2.0, far)
    back = replace(
        c, past=past, members=members(past, c.stack, c.design.targets), sites={(s.part, s.site): s for s in sites},
        sizes=_bare_back(c.sizes),
    )  # fmt: skip
    # the link bends about another place; everything else goes by the parts as they are
    bent = replace(
        back, design=replace(c.design, mechanism=replace(c.design.mechanism, stop_reach=contact.reach))
    )  # fmt: skip
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        rows = [row for family in FAMILIES for row in family(back)] + link.check(bent)
    found = [_renamed(row) for row in rows if row.case and row.crank_angle is not None]
    if contact.on_edge:
        found = [_on_edge(row) if (row.part, row.check) == ("stop", "contact") else row for row in found]
    return (*found, *_draw(c, figures))


def _bare_back(sizes: Sizes) -> Sizes:
    """Only the flank that meets the stop's front is hardened."""
    steel = replace(sizes.link.material, surface_yield=None, case_depth=None)
    return replace(sizes, link=replace(sizes.link, material=steel))


def _renamed(row: Check) -> Check:
    angle = None if row.crank_angle is None else 0.0 - row.crank_angle
    site = "back_flank" if row.site == "stop_flank" else row.site
    return replace(row, case=REVERSED, crank_angle=angle, site=site)


def _on_edge(row: Check) -> Check:
    return replace(row, capacity=0.0, method="an edge against a flank", source="no formula", note=EDGE)


def _draw(c: Context, figures: Cycle) -> list[Check]:
    """The reversed machine's draw against what the spring bears and what its table tells."""
    spring = c.design.spring
    drawn = max(0.0, float(figures.most_pull) - c.design.far_end.slack)
    given = (
        ("most draw", spring.most_draw, "draw of the reversed machine against what the spring bears"),
        (
            "end of the table", None if spring.table is None else float(spring.table[0, -1]),
            "draw of the reversed machine against the last draw that the spring's table tells of",
        ),
    )  # fmt: skip
    return [
        Check("spring", "draw", what, REVERSED, None, drawn, limit, "mm", 1.0, how, "as given in the design")
        for what, limit, how in given
        if limit is not None
    ]
