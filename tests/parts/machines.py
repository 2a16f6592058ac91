"""Whole machines made by hand for the tests of parts, assembly and clash sweep."""

from __future__ import annotations

from typing import Literal, Protocol

import numpy as np

from loads.cycle import events
from loads.far_ends.registry import linkage_of
from loads.linkage import Linkage, chain_line, to_machine
from parts.clash import Sweep
from parts.design import (
    ChainEndWish,
    Design,
    DiscWish,
    Floats,
    Friction,
    Identity,
    LinkWish,
    Material,
    Mechanism,
    PinWish,
    Sheave,
    Spring,
    StopWish,
    Targets,
)
from parts.far_ends.chain import Chain
from parts.sizes import (
    ChainEndSizes,
    ChainPinSizes,
    CrankPinSizes,
    DiscSizes,
    LinkSizes,
    Sizes,
    StopSizes,
)
from parts.stack import Stack, make_stack


class Make(Protocol):
    """Makes one of the two machines, turning either way, with either stop."""

    __name__: str

    def __call__(self, rotation: Rotation = "ccw", style: Style = "post") -> tuple[Design, Sizes]: ...


Rotation = Literal["ccw", "cw"]
Style = Literal["post", "block"]

STEEL = Material("S355J2", "structural steel", 210_000, 0.3, 7850, ((40, 345),), ((100, 470),), "a list", True)

LEAF = Chain(
    designation="LH1644", kind="leaf", strands=1, pitch=25.4, width_over_pins=37.0, plate_height=24.0, own_pin=9.5,
    min_tensile_strength=169_000, tongue_width=4.1, plate_thickness=4.0, lacing=(4, 4), mass_per_metre=None, slack=0.0,
    source="a list", confirmed=True,
)  # fmt: skip
ROLLER = Chain(
    designation="08B-1", kind="roller", strands=1, pitch=12.7, width_over_pins=17.0, plate_height=11.8, own_pin=4.45,
    min_tensile_strength=17_800, tongue_width=7.5, plate_thickness=1.6, lacing=(2, 2), mass_per_metre=0.7, slack=2.0,
    source="a list", confirmed=True,
)  # fmt: skip


def large(rotation: Rotation = "ccw", style: Style = "post") -> tuple[Design, Sizes]:
    """A twin stack on leaf chain."""
    sign = 1.0 if rotation == "ccw" else -1.0
    mechanism = Mechanism("twin", rotation, 58.0, 86.0, np.radians(3.0), 74.0, np.radians(4.0))
    sheave = Sheave((430.0, sign * 35.0), 48.0, "left" if sign > 0 else "right", None, 0.97)
    sizes = Sizes(
        1.0,
        DiscSizes(190.0, 20.0, 30.0, 130.0, 6, 9.0, np.radians(30.0), "M8", 15.0, 8.5, STEEL),
        LinkSizes(44.0, 20.0, 0.0, 0.0, STEEL),
        StopSizes(style, 25.0, 60.0, 25.0, 21.0, 8.0, "M8", 9.0, 6.8, STEEL),
        CrankPinSizes(22.0, 0.0, 0.0, STEEL),
        ChainPinSizes(20.0, 24.0, 30.0, 22.9, 1.3, 3.0, STEEL),
        ChainEndSizes(37.0, 40.0, 50.8, 9.5, 4.0, ((2.0, 6.3), (10.3, 14.6)), 33.5, STEEL),
    )
    return _design(mechanism, sheave, LEAF, 1200.0, 210.0), sizes


def small(rotation: Rotation = "ccw", style: Style = "post") -> tuple[Design, Sizes]:
    """A single stack on roller chain."""
    sign = 1.0 if rotation == "ccw" else -1.0
    mechanism = Mechanism("single", rotation, 30.0, 46.0, np.radians(4.0), 38.0, np.radians(4.0))
    sheave = Sheave((40.0, sign * 300.0), 32.0, "right" if sign > 0 else "left", None, 0.97)
    sizes = Sizes(
        0.5,
        DiscSizes(105.0, 12.0, 16.0, 66.0, 4, 5.5, np.radians(50.0), "M5", 10.0, 5.5, STEEL),
        LinkSizes(24.0, 10.0, 17.5, 2.8, STEEL),
        StopSizes(style, 12.0, 30.0, 14.0, 10.5, 4.0, "M4", 4.5, 3.3, STEEL),
        CrankPinSizes(10.0, 16.5, 2.5, STEEL),
        ChainPinSizes(10.0, 8.0, 13.5, 7.6, 0.9, 1.5, STEEL),
        ChainEndSizes(7.3, 16.0, 25.4, 4.45, 7.3, (), 15.0, STEEL),
    )
    return _design(mechanism, sheave, ROLLER, 40.0, 3.0), sizes


def _design(mechanism: Mechanism, sheave: Sheave, chain: Chain, preload: float, rate: float) -> Design:
    return Design(
        Identity("A machine", "PIR-100", "A", "metric"), mechanism, sheave, Spring(preload, rate, None, None), chain,
        DiscWish(), LinkWish(), StopWish(), PinWish(), PinWish(), ChainEndWish(), None,
        Friction(0.005, 0.12, 0.12, None), Targets(1.5, 0.6, 5.0, 2.5, 1.5), None, None, "",
    )  # fmt: skip


def stack_of(design: Design, sizes: Sizes) -> Stack:
    return make_stack(
        design.mechanism.stack,
        design.targets.load_share,
        design.far_end,
        sizes.chain_end.width,
        sizes.plate_gap,
        sizes.link.thickness,
        sizes.disc.thickness,
    )


def _machine_direction(m: Linkage, angle: Floats) -> Floats:
    x, y = to_machine(m, np.cos(angle), np.sin(angle))
    return np.arctan2(y, x)


def sweep_poses(design: Design, step: float = np.radians(2.0)) -> Sweep:
    """Winding from the start dead centre to the release, and the link's swing after it."""
    m = linkage_of(design).expanded()
    at = events(linkage_of(design))
    catch, release = float(at.catch), float(at.release)
    r, length, beta = (float(v[0]) for v in (m.crank_radius, m.link_length, m.seat_angle))
    winding = np.concatenate([np.arange(0.0, catch, step), np.arange(catch, release, step), [release]])
    swing = np.append(np.arange(beta, np.pi, step), np.pi)
    theta = np.concatenate([winding, np.full_like(swing, release)])
    ax, ay = r * np.cos(theta), r * np.sin(theta)
    free = chain_line(m, ax, ay).direction  # while it is free the link lies along the chain
    seated = theta + np.pi + beta
    link = np.where(theta < catch, free, seated)
    link[len(winding) :] = release + np.pi + swing
    line = chain_line(m, ax + length * np.cos(link), ay + length * np.sin(link))
    taut = np.arange(len(theta)) < len(winding)
    return Sweep(
        crank_angle=theta,
        disc_angle=_machine_direction(m, theta),
        link_angle=_machine_direction(m, link),
        chain_angle=_machine_direction(m, line.direction),
        free_length=line.free_length,
        taut=taut,
    )
