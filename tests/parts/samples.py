"""Small parts made by hand for the tests of shapes, solids and files; none of them is a part of the machine."""

from __future__ import annotations

from dataclasses import replace
from math import cos, pi, sin, tau

from parts.outline import (
    Arc,
    Counterbore,
    Hole,
    Line,
    Mark,
    Part,
    Placement,
    Plate,
    Segment,
    Slot,
    Step,
    Turned,
)


def _part(key: str, title: str, body: Plate | Turned, hand: str = "", away: int = -1, stock: str = "") -> Part:
    return Part(
        key=key,
        title=title,
        hand=hand,
        away=away,
        body=body,
        frame="disc",
        material="S355J2",
        density=7850.0,
        stock=stock,
        process="cut, bore",
        placements=(Placement("disc", (0.0, 0.0, away * 12.0)),),
        color=(0.45, 0.55, 0.65),
        notes=("Break sharp edges 0.3",),
    )


def stadium(reach: float, half: float) -> tuple[Segment, ...]:
    """Two eyes of radius ``half``, ``reach`` apart, joined by straight flanks."""
    return (
        Line((0.0, -half), (reach, -half), "right_flank"),
        Arc((reach, -half), (reach, half), (reach, 0.0), True, "far_eye"),
        Line((reach, half), (0.0, half), "left_flank"),
        Arc((0.0, half), (0.0, -half), (0.0, 0.0), True, "near_eye"),
    )


def disc(hand: str = "", away: int = -1) -> Part:
    """A round disc: bore, six counterbored bolt holes, a reamed pin hole, two dowel holes too small to cut, marks."""
    rim: tuple[Segment, ...] = (
        Arc((90.0, 0.0), (-90.0, 0.0), (0.0, 0.0), True, "rim_upper"),
        Arc((-90.0, 0.0), (90.0, 0.0), (0.0, 0.0), True, "rim_lower"),
    )
    spots = [(32 * cos(tau * i / 6 + pi / 6), 32 * sin(tau * i / 6 + pi / 6)) for i in range(6)]
    bolts = [Hole(f"bolt_hole_{i + 1}", at, 13.5) for i, at in enumerate(spots)]
    sinks = [Counterbore(f"bolt_sink_{i + 1}", at, 20.0, 13.0, "chain") for i, at in enumerate(spots)]
    return _part(
        "crank_disc",
        "Crank disc",
        Plate(
            outline=rim,
            holes=(
                Hole("bore", (0.0, 0.0), 25.0, "H7", "ream, fit of the hub's spigot"),
                *bolts,
                Hole("crank_pin_hole", (60.0, 0.0), 24.0, "H7", "ream, press fit of the crank pin"),
                Hole("dowel_hole_1", (30.0, 58.0), 6.0, "H7"),
                Hole("dowel_hole_2", (44.0, 50.0), 6.0, "H7"),
                Hole("stop_bolt_hole", (38.0, 62.0), 6.6),
            ),
            thickness=20.0,
            counterbores=tuple(sinks),
            marks=(
                Mark("index", strokes=(((78.0, 0.0), (88.0, 0.0)),)),
                Mark("number", text="PIR-100 CRANK DISC A", at=(-55.0, -62.0), height=5.0),
            ),
        ),
        hand,
        away,
        "plate 20 mm",
    )


def link(hand: str = "front", away: int = 1) -> Part:
    """A stadium link with a head's counterbore round one eye; not its own mirror image because of its mark."""
    plate = Plate(
        outline=stadium(86.0, 22.0),
        holes=(
            Hole("crank_pin_eye", (0.0, 0.0), 24.0, "H7"),
            Hole("chain_pin_eye", (86.0, 0.0), 20.0, "H7"),
            Hole("set_hole", (43.0, 10.0), 9.0),
        ),
        thickness=12.0,
        counterbores=(Counterbore("crank_pin_sink", (0.0, 0.0), 34.0, 4.0, "chain"),),
        marks=(Mark("number", text="PIR-100 LINK", at=(24.0, -16.0), height=4.0, direction=0.0),),
    )
    return _part("swing_link", "Swing link", plate, hand, away, "plate 12 mm")


def chain_end() -> Part:
    """A block with a round nose, two holes, and two pairs of slots milled across one end."""
    half = 20.0
    outline: tuple[Segment, ...] = (
        Line((0.0, -half), (70.0, -half), "right_side"),
        Line((70.0, -half), (70.0, half), "chain_face_end"),
        Line((70.0, half), (0.0, half), "left_side"),
        Arc((0.0, half), (0.0, -half), (0.0, 0.0), True, "nose"),
    )
    plate = Plate(
        outline=outline,
        holes=(Hole("chain_pin_hole", (0.0, 0.0), 22.0, "F8"), Hole("chain_hole", (55.0, 0.0), 14.0)),
        thickness=36.0,
        slots=(Slot("plate_slot_1", 32.0, 0.0, 2.5), Slot("plate_slot_2", 32.0, 7.0, 12.0)),
    )
    return replace(_part("chain_end", "Chain end", plate, away=1), frame="chain end")


def pin() -> Part:
    """A stepped pin: two named steps of one diameter, a collar, a groove, chamfers at its ends."""
    body = Turned(
        (
            Step("press", -20.0, 0.0, 20.0, chamfer_from=1.0),
            Step("journal", 0.0, 14.0, 20.0),
            Step("collar", 14.0, 18.0, 30.0, chamfer_to=0.5),
            Step("middle", 18.0, 40.0, 18.0),
            Step("groove", 40.0, 41.6, 15.0),
            Step("tail", 41.6, 45.0, 18.0, chamfer_to=1.5),
        )
    )
    return _part("chain_pin", "Chain pin", body, stock="round bar 32 mm")


def spacer() -> Part:
    return _part("spacer", "Spacer", Turned((Step("ring", 1.0, 9.0, 30.0, 0.5, 0.5),), bore=20.5))


ALL = (disc("back", -1), disc("front", 1), link("back", -1), link(), chain_end(), pin(), spacer())
