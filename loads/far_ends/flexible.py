"""What chain, rope and webbing have in common: the run over a sheave, and the pin on which an eye of theirs hangs."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from loads.checks.bearings import bearing_checks
from loads.checks.context import BEAM, COMMON, Context, length_of
from loads.checks.pins import double_shear_moment, pin_checks
from loads.cycle import Cycle
from loads.far_ends.own_pin import own_pin
from loads.lines import SheaveRun
from loads.linkage import Linkage, make_linkage
from loads.records import Check, FarSite
from loads.spring_law import law_of
from parts.design import Design, Floats
from parts.problems import Problem

MOST_WRAP = math.radians(270.0)


def sites(noun: str) -> tuple[FarSite, ...]:
    """The plate that it takes hold of, itself, the sheave, and what the frame has to hold."""
    return (
        FarSite("chain_end", "chain_pin_eye", "back"),
        FarSite("chain_end", "chain_hole", "pull"),
        FarSite(noun, "strand", "pull"),
        FarSite("sheave", "groove", "guide"),
        FarSite("sheave_pin", "journal", "guide"),
        FarSite("frame", "sheave", "guide"),
    )


def linkage(design: Design) -> Linkage:
    """The machine of one design that runs over a sheave, without the friction that needs pin sizes."""
    m, s = design.mechanism, design.sheave
    assert s is not None
    return make_linkage(
        crank_radius=m.crank_radius,
        link_length=m.link_length,
        seat_angle=m.seat_angle,
        stop_reach=m.stop_reach,
        hold_margin=m.hold_margin,
        sheave_x=s.center[0],
        sheave_y=s.center[1],
        pitch_radius=s.pitch_radius,
        wrap=1.0 if s.wrap == "left" else -1.0,
        turn=1.0 if m.rotation == "ccw" else -1.0,
        exit_angle=np.nan if s.exit_angle is None else s.exit_angle,
        efficiency=s.efficiency,
        slack=design.far_end.slack,
        spring=law_of(design.spring),
    )


def problems(design: Design, figures: Cycle) -> Iterator[Problem]:
    """A wrap that would cross itself, slack that is never taken up."""
    assert design.sheave is not None
    noun = design.far_end.noun
    if float(figures.most_wrap) > MOST_WRAP or float(figures.least_wrap) < 0.0:
        wrap = f"a wrap of {math.degrees(figures.least_wrap):.1f} to {math.degrees(figures.most_wrap):.1f} deg over the turn"
        key = "sheave.exit_angle" if design.sheave.exit_angle is not None else "sheave.wrap"
        text = f"the {noun} would cross itself, or leave the sheave: above 270 deg or below 0"
        yield Problem(key, None, wrap, "a wrap within 0 and 270 deg at every crank angle", text)
    slack, most_pull = design.far_end.slack, float(figures.most_pull)
    if slack >= most_pull:
        accepted = f"less than the whole pull, {most_pull:.2f} mm"
        yield Problem(f"{noun}.slack", None, f"{slack:g} mm", accepted, "the slack is never taken up")


def strength(c: Context, method: str) -> Check:
    """Least strength over the largest tension with shock."""
    far = c.design.far_end
    listed = far.source + ("" if far.confirmed else " (from memory, confirm with the maker's certificate)")
    tension = length_of(c.members.chain_on_pin)
    return c.worst_check(
        far.noun, "strand", "tension", tension, far.min_tensile_strength, "N", c.design.targets.chain, method, listed
    )


def sheave(c: Context, least_diameter: float, how: str, whence: str) -> list[Check]:
    """The sheave's pin in double shear between two cheeks, its bearing, and how sharply is bent over it."""
    pin, bush, wheel = c.running.sheave_pin, c.running.sheave_bearing, c.design.sheave
    assert pin is not None
    assert bush is not None
    assert wheel is not None
    force = length_of(c.site("sheave_pin", "journal").force)
    moment = double_shear_moment(force, pin.cheek, pin.hub, pin.gap)
    rows = pin_checks(c, "sheave_pin", "journal", pin.diameter, pin.material, force / 2.0, moment, False)
    rows.append(
        c.shape_check(
            "sheave", "groove", f"{c.design.far_end.noun} bends over the sheave", least_diameter,
            2.0 * wheel.pitch_radius, "mm", how, whence,
        )
    )  # fmt: skip
    turning = c.design.moving.disc_speed if c.design.moving is not None else None
    speed = None
    if turning and wheel.pitch_radius > 0.0:
        speed = turning * np.abs(c.past.state.line.arm) / wheel.pitch_radius * c.past.over(1.0, 0.0)  # while it winds
    return rows + bearing_checks(c, "sheave_bearing", "bore", bush, force, speed)


def clear_at_the_start(c: Context, room: float, what: str) -> Check:
    """Room between the chain end and the sheave when the link points at it; ``room`` mm of what follows it."""
    m, end = c.design.mechanism, c.sizes.chain_end
    reach = m.crank_radius + m.link_length + end.length + room
    run = c.past.machine.far
    assert isinstance(run, SheaveRun)
    return c.shape_check(
        "chain_end", "chain_hole", "clear of the sheave at the start", reach, float(run.distance), "mm",
        f"chain end and {what} lie before the sheave", COMMON,
    )  # fmt: skip


def bridge_moment(force: Floats, width: float, cheek: float) -> Floats:
    """Moment (N·mm) in the middle of a fork's bridge: the chain pin's pull spread over its ``width``, half of it in each
    cheek. N, mm. Source: beam theory.
    """
    return np.asarray(force / 2.0 * ((width - cheek) / 2.0 - width / 4.0))


def bridge_depth(force: float, width: float, cheek: float, height: float, stress: float) -> float:
    """Depth (mm) of a fork's bridge at which it is bent to a stress (MPa). Source: beam theory, M = σ h d²/6."""
    return math.sqrt(6.0 * float(bridge_moment(np.asarray(force), width, cheek)) / (stress * height))


def fork_checks(c: Context, eye_width: float, eye_height: float) -> list[Check]:
    """A fork about an eye: its pin in double shear and bending, and room for the eye in the slot."""
    end = c.sizes.chain_end
    slot = 2.0 * end.slots[0][1]
    force = length_of(c.members.chain_on_pin)
    moment = bridge_moment(force, end.width, (end.width - slot) / 2.0)
    depth = end.length + end.height / 2.0 - end.slot_depth - c.sizes.chain_pin.middle_diameter / 2.0
    f_y = end.material.yield_strength(end.width)
    return [
        c.worst_check(
            "chain_end", "bridge", "bending", moment, f_y * end.height * max(depth, 0.0) ** 2 / 6.0, "N·mm",
            c.design.targets.yield_, f"W_el f_y of the bridge between pin and slot, {max(depth, 0.0):.3g} mm deep", BEAM,
        ),
        *own_pin(c, f"{c.design.far_end.noun}_connecting_pin"),
        c.shape_check(
            "chain_end", "slots", "eye fits the slot", eye_width, slot, "mm", "slot no narrower than the eye", BEAM
        ),
        c.shape_check(
            "chain_end", "slots", "slot clears the eye", eye_height / 2.0, end.slot_depth - end.height / 2.0, "mm",
            "slot reaches past the eye, measured from its pin", COMMON,
        ),
    ]  # fmt: skip
