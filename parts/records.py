"""The design's records from its tables: where a key was left out the default is taken, and noted with its reason."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal, TypeVar, cast

import numpy as np

from parts.design import (
    Assumed,
    Enclosure,
    Fatigue,
    Friction,
    Identity,
    Material,
    Mechanism,
    Moving,
    Sheave,
    Spring,
    StopWish,
    Targets,
)
from parts.far_ends.base import PRACTICE, FarEnd
from parts.schema import (
    DesignTable,
    EnclosureTable,
    FatigueTable,
    FrictionTable,
    MaterialTable,
    MechanismTable,
    MovingTable,
    SheaveTable,
    SpringTable,
    StopTable,
    TargetsTable,
)

V = TypeVar("V")


@dataclass
class Defaults:
    """What has been assumed so far."""

    assumed: list[Assumed] = field(default_factory=list)

    def take(self, key: str, given: V | None, value: V, quantity: str, why: str) -> V:
        """What the file gives, or else the default, which is then noted."""
        if given is not None:
            return given
        self.assumed.append(Assumed(key, cast("float | str", value), quantity, why))
        return value


def identity(given: DesignTable, defaults: Defaults) -> Identity:
    units: Literal["metric", "us"] = "metric"
    return Identity(
        title=defaults.take("design.title", given.title, "Untitled over-centre draw", "text", "no title given"),
        number=defaults.take("design.number", given.number, "DC-1", "text", "no number given"),
        revision=defaults.take("design.revision", given.revision, "A", "text", "the first issue"),
        units=defaults.take("design.units", given.units, units, "text", "no units asked for"),
    )


def mechanism(given: MechanismTable, defaults: Defaults) -> Mechanism:
    """``crank_radius`` and ``link_length`` must be there."""
    r, length = given.crank_radius or 0.0, given.link_length or 0.0
    stack: Literal["twin", "single"] = "twin"
    rotation: Literal["ccw", "cw"] = "ccw"
    reverse: Literal["forbidden", "rated"] = "forbidden"
    return Mechanism(
        stack=defaults.take(
            "mechanism.stack", given.stack, stack, "text", "a link on each side of the chain, so no offset couple"
        ),
        rotation=defaults.take("mechanism.rotation", given.rotation, rotation, "text", "no rotation given"),
        crank_radius=r,
        link_length=length,
        seat_angle=defaults.take(
            "mechanism.seat_angle",
            given.seat_angle,
            math.radians(3),
            "angle",
            "the link seats early, so the drive torque never falls to zero in the middle",
        ),
        stop_reach=defaults.take(
            "mechanism.stop_reach",
            given.stop_reach,
            r + 0.55 * (length - r),
            "length",
            "crank radius + 0.55 of what the link is longer",
        ),
        hold_margin=defaults.take(
            "mechanism.hold_margin",
            given.hold_margin,
            math.radians(4),
            "angle",
            f"held short of the null and the release, {PRACTICE}",
        ),
        reverse=defaults.take(
            "mechanism.reverse", given.reverse, reverse, "text",
            "an interlock keeps the machine from running backwards onto the back of its stop",
        ),
    )  # fmt: skip


def sheave(given: SheaveTable, pitch_radius: float, far_end: FarEnd, defaults: Defaults) -> Sheave:
    """``center`` must be there; ``pitch_radius`` is the given one or the default."""
    if given.exit_angle is None:
        why = f"the {far_end.noun} goes back the way it came"
        defaults.assumed.append(Assumed("sheave.exit_angle", "half a wrap", "text", why))
    wrap: Literal["left", "right"] = "left"
    defaults.take("sheave.pitch_radius", given.pitch_radius, pitch_radius, "length", far_end.usual_sheave[1])
    return Sheave(
        center=given.center or (0.0, 0.0),
        pitch_radius=pitch_radius,
        wrap=defaults.take("sheave.wrap", given.wrap, wrap, "text", "no wrap given"),
        exit_angle=given.exit_angle,
        efficiency=defaults.take(
            "sheave.efficiency", given.efficiency, 0.97, "number", f"a greased sheave, {PRACTICE}"
        ),
    )


def spring(given: SpringTable, table_file: str | None, defaults: Defaults) -> Spring:
    if given.table is not None:
        table = np.array(given.table, dtype=np.float64).T
        table.setflags(write=False)
        return Spring(0.0, 0.0, table, given.most_draw, table_file)
    preload = defaults.take("spring.preload", given.preload, 0.0, "force", "a spring at rest at zero draw")
    return Spring(preload, given.rate or 0.0, None, given.most_draw)


def stop(given: StopTable, material: Material | None) -> StopWish:
    """The stop's style follows from the sizes that are given; with none of them it is left to proportion."""
    style = given.style
    if style is None and given.diameter is not None:
        style = "post"
    elif style is None and (given.length is not None or given.width is not None):
        style = "block"
    return StopWish(
        style=style,
        diameter=given.diameter,
        length=given.length,
        width=given.width,
        height=given.height,
        surface_yield=given.surface_yield,
        case_depth=given.case_depth,
        material=material,
    )


def friction(given: FrictionTable, defaults: Defaults) -> Friction:
    def coefficient(key: str, value: float | None, usual: float, what: str) -> float:
        return defaults.take(f"friction.{key}", value, usual, "number", f"{what}, {PRACTICE}")

    return Friction(
        bearing=coefficient("bearing", given.bearing, 0.10, "a greased plain bush"),
        crank_pin=coefficient("crank_pin", given.crank_pin, 0.12, "greased steel on steel, always turning"),
        chain_pin=coefficient("chain_pin", given.chain_pin, 0.15, "greased steel on steel, turning little"),
        bearing_radius=given.bearing_radius,
    )


def targets(given: TargetsTable, far_end: FarEnd, defaults: Defaults) -> Targets:
    def factor(key: str, value: float | None, usual: float, why: str) -> float:
        return defaults.take(f"targets.{key}", value, usual, "number", why)

    return Targets(
        shock_factor=factor("shock_factor", given.shock_factor, 1.25, PRACTICE),
        load_share=factor("load_share", given.load_share, 0.6, f"two discs never turn quite together, {PRACTICE}"),
        chain=factor("chain", given.chain, *far_end.usual_factor),
        ultimate=factor("ultimate", given.ultimate, 2.4, "ASME BTH-1 design category A: fracture 1.20 Nd"),
        yield_=factor("yield", given.yield_, 2.0, "ASME BTH-1 design category A: Nd = 2.00"),
    )


def enclosure(given: EnclosureTable) -> Enclosure:
    outline = None if given.outline is None else np.array(given.outline, dtype=np.float64)
    obstacles = tuple(np.array(corners, dtype=np.float64) for corners in given.obstacles or ())
    for polygon in (*obstacles, *(() if outline is None else (outline,))):
        polygon.setflags(write=False)
    return Enclosure(outline, given.above, given.below, given.behind, given.ahead, obstacles)


def moving(given: MovingTable, defaults: Defaults) -> Moving:
    return Moving(
        mass=defaults.take("moving.mass", given.mass, 0.0, "mass", "not needed: the mass is stopped elsewhere"),
        payload_mass=defaults.take("moving.payload_mass", given.payload_mass, 0.0, "mass", "no payload given"),
        payload_leaves_at=given.payload_leaves_at,
        bumper_stiffness=given.bumper_stiffness,
        bumper_travel=given.bumper_travel,
        gravity=given.gravity,
        disc_speed=given.disc_speed,
        stopped_elsewhere=given.stopped_elsewhere or False,
        line_stiffness=given.line_stiffness,
        line_damping=given.line_damping,
        sheave_mass=given.sheave_mass,
        bumper_damping=given.bumper_damping,
    )


_SURFACES = {  # by what has them: the usual one, and why
    "plates": ("hot-rolled", "faces as rolled; the flanks are better"),
    "holes": ("machined", "bored and reamed"),
    "pins": ("ground", "turned, hardened and ground"),
}


def fatigue(given: FatigueTable, defaults: Defaults) -> Fatigue:
    """``shots`` must be there."""
    surfaces = given.surface or {}
    return Fatigue(
        shots=given.shots or 0.0,
        reliability=defaults.take(
            "fatigue.reliability", given.reliability, 0.99, "number", f"one part in a hundred may fail, {PRACTICE}"
        ),
        surfaces={
            what: defaults.take(f"fatigue.surface.{what}", surfaces.get(what), usual, "text", why)
            for what, (usual, why) in _SURFACES.items()
        },
        fillet_radius=defaults.take(
            "fatigue.fillet_radius", given.fillet_radius, 0.5, "length", f"at the pins' shoulders, {PRACTICE}"
        ),
        chain_dynamic_strength=given.chain_dynamic_strength,
    )


def own_material(name: str, key: str, given: MaterialTable, raw: Mapping[str, object], defaults: Defaults) -> Material:
    """A material of one's own; its strengths hold at every thickness. Refused values come out as 0."""
    poissons_ratio = given.poissons_ratio
    if "poissons_ratio" not in raw:
        poissons_ratio = defaults.take(f"{key}.poissons_ratio", None, 0.3, "number", "as of most metals")
    return Material(
        name=name,
        kind=given.kind or "own",
        youngs_modulus=given.youngs_modulus or 0.0,
        poissons_ratio=poissons_ratio or 0.0,
        density=given.density or 0.0,
        yields=((math.inf, given.yield_ or 0.0),),
        ultimates=((math.inf, given.ultimate or 0.0),),
        source=given.source or "",
        confirmed=True,
    )
