"""Whether the parts go together: webs between holes, the clash sweep, what must not stand proud, the spring's draw."""

from __future__ import annotations

from dataclasses import replace

from loads.checks.context import COMMON, Context
from loads.records import Check
from parts.outline import Plate
from parts.shape import Web, least_web, sound
from parts.stop_layout import floor_under_head

WEB_OVER_HOLE = 0.25  # least web beside a hole as a share of its diameter
LEAST_WEB = 2.0  # mm
LEAST_GAP = 0.2  # mm
GEOMETRY = "geometry of the design"


def check(c: Context) -> list[Check]:
    """All checks of shape and room."""
    return [*_plates(c), *_gap(c), *_sinks(c), *_press(c), *_stop(c), *_spring(c), *_clashes(c)]


def _gap(c: Context) -> list[Check]:
    return [
        c.shape_check(
            "assembly", "between the plates", "running gap", LEAST_GAP, c.stack.plate_gap, "mm",
            "plates that turn past each other stand apart", COMMON,
        )
    ]  # fmt: skip


def _plates(c: Context) -> list[Check]:
    """For each plate its thinnest web, and a row where it cannot be cut or modelled as one piece."""
    rows, seen = [], set()
    for part in c.parts:
        if isinstance(part.body, Plate) and part.key not in seen:  # both hands have one outline
            seen.add(part.key)
            webs = least_web(part.body)
            rows += [*_shape(c, part.key, part.body, webs), *_web(c, part.key, part.body, webs)]
    return rows


def _shape(c: Context, key: str, plate: Plate, webs: tuple[Web, ...]) -> list[Check]:
    # with material round every hole only the outline itself can be at fault
    bare = plate if any(web.thickness <= 0.0 for web in webs) else replace(plate, holes=(), counterbores=(), slots=())
    faults = sound(bare)
    if not faults:
        return []
    return [
        c.shape_check(
            key, "outline", "can be made in one piece", float(len(faults)), 0.0, "faults",
            "closed outline, holes inside it and apart", GEOMETRY, "; ".join(faults),
        )
    ]  # fmt: skip


def _web(c: Context, key: str, plate: Plate, webs: tuple[Web, ...]) -> list[Check]:
    if not webs:
        return []
    diameters = {hole.name: hole.diameter for hole in plate.holes}
    diameters |= {sink.name: sink.diameter for sink in plate.counterbores}

    def wanted(web: Web) -> float:
        return max(LEAST_WEB, WEB_OVER_HOLE * max(diameters.get(web.one, 0.0), diameters.get(web.other, 0.0)))

    worst = min(webs, key=lambda web: web.thickness / wanted(web))
    return [
        c.shape_check(
            key, f"{worst.one} / {worst.other}", "web", wanted(worst), max(worst.thickness, 0.0), "mm",
            f"least material beside a hole, {WEB_OVER_HOLE:g} of its diameter and {LEAST_WEB:g} mm", COMMON,
        )
    ]  # fmt: skip


def _sinks(c: Context) -> list[Check]:
    disc, link, pin = c.sizes.disc, c.sizes.link, c.sizes.crank_pin
    rows = [
        c.shape_check(
            "crank_disc",
            "hub_bolt_sink",
            "floor under the bolt heads",
            0.3 * disc.thickness,
            disc.thickness - disc.counterbore_depth,
            "mm",
            "a third of the thickness stays under heads that lie below the face",
            COMMON,
        )
    ]
    if c.sizes.stop.style == "block":
        rows.append(
            c.shape_check(
                "crank_disc", "stop_bolt_sink", "floor under the stop's bolt heads", 0.3 * disc.thickness,
                floor_under_head(disc.thickness, c.sizes.stop.bolt_thread), "mm",
                "a third of the thickness stays under heads that lie below the back, where the hub seats", COMMON,
            )
        )  # fmt: skip
    if link.counterbore_depth > 0.0:
        rows.append(
            c.shape_check(
                "swing_link",
                "crank_pin_head_sink",
                "pin head below the face",
                pin.head_thickness,
                link.counterbore_depth,
                "mm",
                "nothing but chain pin and chain end enters the chain's plane",
                GEOMETRY,
            )
        )
        rows.append(
            c.shape_check(
                "swing_link",
                "crank_pin_head_sink",
                "floor under the pin head",
                0.4 * link.thickness,
                link.thickness - link.counterbore_depth,
                "mm",
                "four tenths of the thickness stay under the head",
                COMMON,
            )
        )
    return rows


def _press(c: Context) -> list[Check]:
    disc = c.sizes.disc
    held = [("crank_pin_hole", c.sizes.crank_pin.diameter)]
    if c.sizes.stop.style == "post":
        held.append(("stop_seat", c.sizes.stop.diameter))
    return [
        c.shape_check(
            "crank_disc",
            name,
            "length of the press seat",
            0.6 * d,
            disc.thickness,
            "mm",
            "a pin held at one end is held over 0.6 of its diameter",
            COMMON,
        )
        for name, d in held
    ]


def _stop(c: Context) -> list[Check]:
    stop, m, link = c.sizes.stop, c.design.mechanism, c.sizes.link
    half = stop.length / 2.0 if stop.style == "block" else 0.0
    room = min(m.stop_reach, m.link_length - m.stop_reach)
    rows = [
        c.shape_check(
            "stop",
            "contact",
            "stays out of the chain's plane",
            stop.height,
            c.stack.plate_gap * 2.0 + link.thickness,
            "mm",
            "height over the disc, up to the gap before the chain's plane",
            GEOMETRY,
        ),
        c.shape_check(
            "stop",
            "contact",
            "reaches across the link",
            0.5 * link.thickness,
            max(0.0, min(stop.height - c.stack.plate_gap, link.thickness)),
            "mm",
            "at least half the link's thickness touches the stop",
            COMMON,
        ),
    ]
    if half:
        rows.append(
            c.shape_check(
                "stop",
                "contact",
                "lies on the straight flank",
                half,
                room,
                "mm",
                "the block touches the flank between the two pins",
                GEOMETRY,
                "" if half <= room else "give a shorter mechanism.stop_reach, or a thicker link for a post",
            )
        )
    return rows


def _spring(c: Context) -> list[Check]:
    most = c.design.spring.most_draw
    if most is None:
        return []
    drawn = float(c.past.figures.most_pull) - c.design.far_end.slack
    return [
        c.shape_check(
            "spring",
            "draw",
            "most draw",
            max(drawn, 0.0),
            most,
            "mm",
            "draw at the end of winding against what the spring bears",
            "the spring's maker, as given in the design",
        )
    ]


def _clashes(c: Context) -> list[Check]:
    """One row that says all is clear, or one a pair that meets and one a part that stands in the chain's plane."""
    method = "layer-by-layer sweep over winding and the swing after the release"
    rows = [
        Check(
            clash.part_a,
            clash.part_b,
            "parts meet",
            clash.sweep,
            clash.crank_angle,
            clash.depth,
            0.0,
            "mm",
            1.0,
            method,
            GEOMETRY,
            f"first at x {clash.x:.1f}, y {clash.y:.1f} mm in the machine frame",
        )
        for clash in c.findings.clashes
    ]
    rows += [
        Check(
            part.part,
            "chain's plane",
            "stands in the chain's plane",
            "",
            part.crank_angle,
            part.depth,
            0.0,
            "mm",
            1.0,
            "nothing but chain pin and chain end may enter it",
            GEOMETRY,
            f"meets the {part.meets.replace('_', ' ')}" if part.meets else "",
        )
        for part in c.findings.intrusions
    ]
    return rows or [Check("assembly", "all layers", "parts meet", "", None, 0.0, 0.0, "mm", 1.0, method, GEOMETRY)]
