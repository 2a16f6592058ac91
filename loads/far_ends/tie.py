"""A rigid tie: its section, its strut when the output pushes back, the output's pin, and how squarely it pulls."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from loads.checks.context import COMMON, Context, length_of, rule_note
from loads.checks.fit import GEOMETRY
from loads.checks.stability import column_stress
from loads.cycle import Cycle
from loads.far_ends.behaviour import Behaviour
from loads.far_ends.own_pin import own_pin
from loads.lines import TiedLine
from loads.linkage import Linkage, make_tied
from loads.records import Check, FarSite
from loads.spring_law import law_of
from parts.design import Design, Floats, Material
from parts.far_ends.tie import PUSH, Slide, Tie
from parts.problems import Problem

LEAST_CLOSING = math.cos(math.radians(45.0))  # a transmission angle of 45°; common practice, no source

SITES = (
    FarSite("tie", "chain_pin_eye", "back"),
    FarSite("tie", "output_eye", "pull"),
    FarSite("output_pin", "journal", "back"),
    FarSite("output", "guide", "guide"),
    FarSite("frame", "output", "guide"),
)


def linkage(design: Design) -> Linkage:
    """The machine of one design with a tie, without the friction that needs pin sizes."""
    m, tie = design.mechanism, design.far_end
    assert isinstance(tie, Tie)
    out = tie.output
    slide = rocker = None
    if isinstance(out, Slide):
        slide = (*out.point, out.direction)
    else:
        leave = np.nan if out.exit_angle is None else out.exit_angle
        rocker = (*out.pivot, out.arm, 1.0 if out.side == "left" else -1.0, out.spring_arm, leave)
    return make_tied(
        crank_radius=m.crank_radius, link_length=m.link_length, seat_angle=m.seat_angle, stop_reach=m.stop_reach,
        tie_length=tie.length, slide=slide, rocker=rocker, turn=1.0 if m.rotation == "ccw" else -1.0,
        hold_margin=m.hold_margin, efficiency=tie.efficiency, spring=law_of(design.spring),
    )  # fmt: skip


def problems(design: Design, figures: Cycle) -> Iterator[Problem]:
    """Nothing beyond what every mechanism needs: a pose that cannot be has no catch, null or release."""
    yield from ()


def strengths(
    tie: Tie, thickness: Floats | float, width: Floats | float, f_y: float, modulus: float
) -> tuple[Floats, Floats, Floats]:
    """Gross section (N), and as a strut with pinned ends about the thin side and in the plane of the disc (N).

    Source: AISC 360-16 equation D2-1, F_y A_g; Shigley, columns with central loading. mm, MPa.
    """
    t, w = np.asarray(thickness, dtype=float), np.asarray(width, dtype=float)
    thin, plane = (
        column_stress(tie.length / (depth / math.sqrt(12.0)), f_y, modulus) * w * t for depth in (t, w)
    )  # fmt: skip
    return np.asarray(f_y * w * t), np.asarray(thin), np.asarray(plane)


def push_of(tie: Tie, pull: Floats) -> float:
    """The largest that the output pushes back with (N), from the pull over crank angle (N)."""
    return tie.push if tie.push is not None else PUSH * float(np.max(pull))


def plate_use(design: Design, thickness: float, width: Floats, steel: Material, pull: Floats) -> Floats:
    """Largest use of the plate between its eyes over widths, targets in."""
    tie = design.far_end
    assert isinstance(tie, Tie)
    gross, thin, plane = strengths(tie, thickness, width, steel.yield_strength(thickness), steel.youngs_modulus)
    push = push_of(tie, pull)
    use = np.maximum(float(np.max(pull)) / gross, np.maximum(push / thin, push / plane))
    return np.asarray(use * design.targets.yield_)


def checks(c: Context) -> list[Check]:
    """Gross section, strut about both axes, output pin, transmission angle. The eyes are checked with all others."""
    tie, plate = c.design.far_end, c.sizes.chain_end
    assert isinstance(tie, Tie)
    pull = length_of(c.members.chain_on_pin)
    t, w, steel = plate.width, plate.height, plate.material
    gross, *struts = strengths(tie, t, w, steel.yield_strength(t), steel.youngs_modulus)
    targets, note = c.design.targets, rule_note(steel)
    rows = [
        c.worst_check(
            "tie", "between the eyes", "gross section", pull, gross, "N", targets.yield_, "F_y A_g, A_g = w t",
            "AISC 360-16 §D2, equation D2-1", note,
        )
    ]  # fmt: skip
    push = push_of(tie, pull)
    why = "" if tie.push is not None else f"push taken as {PUSH:.0%} of the largest pull, {COMMON}; give tie.push"
    for axis, depth, capacity in zip(("about the thin side", "in the plane of the disc"), (t, w), struts, strict=True):
        slenderness = tie.length / (depth / math.sqrt(12.0))
        rows.append(
            Check(
                "tie", "between the eyes", f"strut {axis}", "", None, push, float(capacity), "N", targets.yield_,
                f"Euler or Johnson, pinned ends, L/r = {slenderness:.0f}", "Shigley, columns with central loading", why,
            )
        )  # fmt: skip
    rows += own_pin(c, "output_pin")
    line = c.past.winding.line
    assert isinstance(line, TiedLine)
    i = int(np.argmin(line.closing))
    rows.append(
        Check(
            "output", "guide", "transmission angle", c.past.case_at(i), float(c.past.winding.crank_angle[i]), LEAST_CLOSING,
            max(float(line.closing[i]), 0.0), "1", 1.0,
            "cosine between the tie and the way of its pin, no less than that of 45°", COMMON,
        )
    )  # fmt: skip
    return [*rows, *_apart(c, line)]


def _apart(c: Context, line: TiedLine) -> list[Check]:
    """Disc and link beside the output: its fork is wider than the tie, so they stand apart seen along the axis."""
    m, s, fork = c.design.mechanism, c.past.winding, c.sizes.chain_end.height / 2.0
    px, py = line.qx + line.length * line.ux, line.qy + line.length * line.uy
    ax, ay = m.crank_radius * np.cos(s.crank_angle), m.crank_radius * np.sin(s.crank_angle)
    lx, ly = np.cos(s.link_direction), np.sin(s.link_direction)
    along = np.clip((px - ax) * lx + (py - ay) * ly, 0.0, m.link_length)
    beside = np.hypot(px - ax - along * lx, py - ay - along * ly)
    how = "apart seen along the axis, the output's fork taken as wide as the tie"
    return [
        c.shape_check(
            "crank_disc", "rim", "clear of the output", c.sizes.disc.outer_diameter / 2.0 + fork,
            float(np.min(np.hypot(px, py))), "mm", how, GEOMETRY,
        ),
        c.shape_check(
            "swing_link", "chain_end_arc", "clear of the output", c.sizes.link.width / 2.0 + fork,
            float(np.min(beside)), "mm", how, GEOMETRY,
        ),
    ]  # fmt: skip


BEHAVIOUR = Behaviour(linkage, SITES, problems, checks, plate_use)
