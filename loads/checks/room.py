"""Whether what carries disc and chain goes together: bolts and holes, shaft, bushes, cheeks, disc and sheave."""

from __future__ import annotations

import numpy as np

from loads.checks.context import COMMON, EN_PINS, Context, length_of
from loads.checks.eyes import bearing
from loads.checks.fit import GEOMETRY
from loads.records import Check
from parts.hardware import cap_screw, cap_screws
from parts.sizes import BearingSizes

LOOSE_HOLE = 1.15  # of the screw's clearance hole, that a bolt hole may be
LEAST_SPIGOT = 5.0  # mm
PLATE_SLENDERNESS = 1.49
CHEEK_YIELD = 235.0  # MPa, of plain structural plate: the frame's material is not in the design


def check(c: Context) -> list[Check]:
    """Rows of shape for drive and sheave, and the bearing of the sheave's pin in its cheeks."""
    return [*_hub(c), *_shaft(c), *_bushes(c), *_cheeks(c), *_sheave(c), *_link(c)]


def _hub(c: Context) -> list[Check]:
    disc, smallest = c.sizes.disc, cap_screws()[0]
    screw = cap_screw(disc.bolt_thread)
    return [
        c.shape_check(
            "crank_disc",
            "hub_bolt_hole",
            "a listed bolt passes",
            smallest.clearance_hole,
            disc.bolt_hole,
            "mm",
            f"{smallest.thread} is the smallest that is listed",
            GEOMETRY,
        ),
        c.shape_check(
            "crank_disc",
            "hub_bolt_hole",
            "bolt fills its hole",
            disc.bolt_hole,
            LOOSE_HOLE * screw.clearance_hole,
            "mm",
            f"{screw.thread}, hole no more than {LOOSE_HOLE:g} of its clearance hole",
            COMMON,
        ),
        c.shape_check(
            "crank_disc",
            "bore",
            "spigot locates the hub",
            LEAST_SPIGOT,
            disc.bore,
            "mm",
            "a spigot that can be turned",
            COMMON,
        ),
    ]


def _shaft(c: Context) -> list[Check]:
    shaft, bush = c.running.shaft, c.running.main_bearing
    rows = [
        c.shape_check(
            "main_shaft",
            "overhang",
            "room for the first bearing",
            bush.width / 2.0,
            shaft.overhang,
            "mm",
            "from the disc's back to the bearing's middle, at least half its width",
            GEOMETRY,
        ),
        c.shape_check(
            "main_shaft",
            "bearings",
            "room between the bearings",
            bush.width,
            shaft.bearing_spacing,
            "mm",
            "spacing no less than a bearing's width",
            GEOMETRY,
        ),
    ]
    if shaft.drive == "key":
        rows += [
            c.shape_check(
                "main_shaft",
                "key",
                "key no longer than twice the shaft",
                shaft.key_length,
                2.0 * shaft.diameter,
                "mm",
                "a longer key does not carry along its whole length",
                COMMON,
            ),
            c.shape_check(
                "main_shaft",
                "key",
                "key longer than wide",
                shaft.key_width,
                shaft.key_length,
                "mm",
                "a key, not a pin",
                COMMON,
            ),
        ]
    return rows


def _bushes(c: Context) -> list[Check]:
    rows = []
    run = c.running
    bushes: list[tuple[str, BearingSizes, float, float | None]] = [
        ("main_bearing", run.main_bearing, run.shaft.diameter, None)
    ]
    if run.sheave_bearing is not None and run.sheave_pin is not None:
        bushes.append(("sheave_bearing", run.sheave_bearing, run.sheave_pin.diameter, run.sheave_pin.hub))
    for part, bush, on, room in bushes:
        if bush.kind != "plain":
            continue
        larger, smaller = max(bush.diameter, on), min(bush.diameter, on)
        rows.append(
            c.shape_check(
                part,
                "bore",
                "bush fits what turns in it",
                larger,
                1.02 * smaller,
                "mm",
                f"bore {bush.diameter:g} mm on {on:g} mm, alike within 2 %",
                GEOMETRY,
            )
        )
        if room is not None:
            rows.append(
                c.shape_check(
                    part,
                    "width",
                    "bush no wider than the sheave",
                    bush.width,
                    room,
                    "mm",
                    "width of the sheave on its pin",
                    GEOMETRY,
                )
            )
    return rows


def _cheeks(c: Context) -> list[Check]:
    pin = c.running.sheave_pin
    if pin is None:
        return []
    force = length_of(c.site("sheave_pin", "journal").force) / 2.0
    f_y = min(CHEEK_YIELD, pin.material.yield_strength(pin.diameter))
    return [
        c.worst_check(
            "sheave_pin",
            "cheek",
            "bearing in the cheek",
            force,
            np.asarray(bearing(pin.cheek, pin.diameter, f_y)),
            "N",
            c.design.targets.yield_,
            f"1.5 t d f_y, half the force in each cheek, f_y {CHEEK_YIELD:g} MPa of plain plate",
            EN_PINS,
        )
    ]


def _sheave(c: Context) -> list[Check]:
    """Disc and link beside the sheave: its cheeks are wider than the chain, so they stand apart seen along the axis."""
    sheave, m = c.design.sheave, c.design.mechanism
    if sheave is None:
        return []
    away = float(np.hypot(*sheave.center))
    rim = sheave.pitch_radius + c.design.far_end.thickness_on_sheave / 2.0
    reach = m.crank_radius + m.link_length + c.sizes.link.width / 2.0
    how = "apart seen along the axis, sheave taken to the outer edge of what runs on it"
    return [
        c.shape_check(
            "crank_disc",
            "rim",
            "clear of the sheave",
            c.sizes.disc.outer_diameter / 2.0 + rim,
            away,
            "mm",
            how,
            GEOMETRY,
        ),
        c.shape_check("swing_link", "chain_end_arc", "clear of the sheave", reach + rim, away, "mm", how, GEOMETRY),
    ]


def _link(c: Context) -> list[Check]:
    """A link so wide for its thickness that it would buckle locally before the strut rules mean anything."""
    link = c.sizes.link
    most = PLATE_SLENDERNESS * float(
        np.sqrt(link.material.youngs_modulus / link.material.yield_strength(link.thickness))
    )
    return [
        c.shape_check(
            "swing_link",
            "between the pins",
            "width over thickness",
            link.width / link.thickness,
            most,
            "1",
            "w/t no more than 1.49 √(E/F_y)",
            "AISC 360-16 table B4.1a (from memory)",
        )
    ]
