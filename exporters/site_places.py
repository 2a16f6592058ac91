"""Where each loaded site lies on its part: one function for every picture. mm, in the part frame.

Bought parts and the frame have none of their own: their sites are given in the machine frame.
"""

from __future__ import annotations

import math

import numpy as np

from loads.examine import Examination, directions
from loads.lines import SheaveRun
from loads.linkage import state, to_machine
from loads.records import LoadRow
from parts.making import flipped, turn_of
from parts.outline import Part, Point
from parts.places import crank_pin, stop_middle

ORIGIN: Point = (0.0, 0.0)
ROUND_PINS = ("crank_pin", "chain_pin")  # their sites lie along the axis; see ``level``
AT_SHEAVE = ("sheave", "output", "spring_anchor")  # sites of the frame that lie where the chain leads to


def made(e: Examination, key: str) -> Part | None:
    """The made part of that key, in the hand behind the chain; None for what is bought."""
    return next((part for part in e.parts if part.key == key), None)


def place(e: Examination, part: str, site: str) -> Point:
    """x and y of a site in its part's frame, or in the machine frame for what has no part frame.

    Raises ``KeyError`` for a site that is not known.
    """
    turn = turn_of(e.design)
    m, sizes = e.design.mechanism, e.sizes
    if part == "crank_disc":
        return {
            "crank_pin_hole": flipped(crank_pin(e.design), turn),
            "stop_seat": flipped(stop_middle(e.design, sizes), turn),
            "hub_face": ORIGIN,
        }[site]
    if part == "swing_link":
        return {
            "crank_pin_eye": ORIGIN,
            "chain_pin_eye": (m.link_length, 0.0),
            "stop_flank": (m.stop_reach, -turn * sizes.link.width / 2.0),
        }[site]
    if part == "stop":
        return {"contact": _contact(e), "root": ORIGIN}[site]
    if part == e.design.far_end.part:
        return {"chain_pin_eye": ORIGIN, e.design.far_end.far_hole: (sizes.chain_end.length, 0.0)}[site]
    if part in ROUND_PINS:
        return ORIGIN
    return machine_place(e, site if part == "frame" else part)


def machine_place(e: Examination, what: str) -> Point:
    """Where a thing that stands still is, in the machine frame."""
    if what in ("main_bearing", "drive"):
        return ORIGIN
    sheave = e.design.sheave
    if sheave is not None and what in ("sheave", "sheave_pin", e.design.far_end.noun):
        return sheave.center
    if sheave is None and what in ("output", "output_pin"):
        return spring_side(e)[0]
    if what == "spring_anchor":
        return spring_side(e)[1]
    raise KeyError(what)


def spring_side(e: Examination, theta: float | None = None) -> tuple[Point, Point]:
    """Where the spring takes hold, and a point further towards it, at a crank angle (rad; the hold if None).

    Machine frame. Over a sheave it is where the chain leaves that, whatever the angle; else the output's pin.
    """
    m = e.machine
    far, span = m.far, 0.3 * (e.design.mechanism.crank_radius + e.design.mechanism.link_length)
    leave = float(far.spring_direction)
    if isinstance(far, SheaveRun):
        w, radius = float(far.wrap_side), float(far.pitch_radius)
        x = float(far.distance) - w * radius * math.sin(leave)
        y = -w * radius + w * radius * math.cos(leave)
        span += radius
    else:
        x, y = _output_pin(e, theta)
    ends = []
    for along in (0.0, span):
        at = to_machine(m, np.asarray(x + along * math.cos(leave)), np.asarray(y + along * math.sin(leave)))
        ends.append((float(at[0]), float(at[1])))
    return ends[0], ends[1]


def _output_pin(e: Examination, theta: float | None) -> Point:
    """The output's pin at a crank angle (rad; the hold if None), in the chain frame."""
    at = float(e.figures.events.hold) if theta is None else theta
    line = state(e.machine, np.array([at]), e.figures.events.catch).line
    reach = float(line.free_length[0])
    return float(line.qx[0]) + reach * float(line.ux[0]), float(line.qy[0]) + reach * float(line.uy[0])


def _contact(e: Examination) -> Point:
    """Where the link's flank touches the stop, in the stop's own frame."""
    turn, stop = turn_of(e.design), e.sizes.stop
    if stop.style == "block":
        return (0.0, turn * stop.width / 2.0)
    beta = e.design.mechanism.seat_angle
    return flipped((stop.diameter / 2.0 * math.sin(beta), -stop.diameter / 2.0 * math.cos(beta)), turn)


def level(e: Examination, part: Part, site: str) -> float:
    """z of a site in the frame of a turned part: the middle of what bears there."""
    stack = e.stack
    depth = {
        ("crank_pin", "journal"): stack.link_middle,
        ("crank_pin", "root"): stack.disc_middle,
        ("stop", "contact"): stack.link_middle,
        ("stop", "root"): stack.disc_middle,
        ("chain_pin", "journal"): 0.0,
        ("chain_pin", "link_seat"): stack.link_middle,
    }[part.key, site]
    return stack.sides[0].z(depth) - part.placements[0].at[2]


def part_turn(e: Examination, part: Part, row: LoadRow) -> float:
    """Angle (rad) from the axes in which a row's components are given to the part's own."""
    if row.frame != "machine":
        return part.placements[0].angle
    return float(directions(e.machine, e.past.state).chain[row.index])


def force_in_part(e: Examination, part: Part, row: LoadRow) -> tuple[float, float]:
    """In-plane force (N) of a row along the axes of its part's frame."""
    turned = part_turn(e, part, row)
    c, s = math.cos(turned), math.sin(turned)
    return (c * row.force[0] + s * row.force[1], c * row.force[1] - s * row.force[0])


def worst_rows(e: Examination, part: str) -> list[LoadRow]:
    """One row a site: the case in which the site's demand is greatest."""
    found = []
    for site in (s for s in e.sites if s.part == part):
        rows = [row for row in e.loads if (row.part, row.site) == (part, site.site)]
        found.append(max(rows, key=lambda row: float(site.demand[row.index])))
    return found
