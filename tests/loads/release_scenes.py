"""Scenes of a release for the tests: of a machine in the chain frame with masses and stiffnesses given, and random ones."""

from __future__ import annotations

import math
from dataclasses import replace

from hypothesis import strategies as st

from loads.cycle import cycle
from loads.linkage import Linkage
from loads.release.scene import Scene
from loads.release.spring_end import spring_end
from tests.loads.machines import machines

FREE = 1e9  # rad: a stop's back that is nowhere


def scene_of(
    m: Linkage,
    *,
    mass: float,
    payload: float = 0.0,
    leaves_at: float = 0.0,
    link_mass: float = 0.0,
    middle: float = 0.45,
    stiffness: float,
    line_damping: float = 0.0,
    friction: bool = False,
    speed: float = 1.0,
    bumper: float = 0.0,
    bumper_travel: float = 0.0,
    bumper_share: float = 0.15,
    gravity: float = 0.0,
    pushes: bool = False,
    stop_stiffness: float = 1e9,
    stop_share: float = 0.1,
    back: float = math.radians(330.0),
    caught_at: float | None = None,
) -> Scene:
    """Masses in tonnes, the link's as that of a slender bar with its middle at a share of its length; mm, N, s, rad."""
    force, work = spring_end(m.spring)
    length = float(m.link_length)
    inertia = link_mass * length**2 * (middle**2 + 1.0 / 12.0)
    return Scene(
        far=m.far._each(float), crank_radius=float(m.crank_radius), link_length=length, slack=float(m.slack),
        theta=float(cycle(m).events.release), speed=speed, front=float(m.seat_angle), back=back,
        reach=float(m.stop_reach), inertia=inertia, first_moment=link_mass * middle * length, link_mass=link_mass,
        mass=mass, weighing=mass, payload=payload, leaves_at=leaves_at, spring=force, spring_work=work, gravity=gravity,
        stiffness=stiffness, damping=2.0 * line_damping * math.sqrt(stiffness * (mass + payload)), pushes=pushes,
        sheave_loss=1.0 - float(m.efficiency) if friction else 0.0,
        pin_friction=float(m.friction_crank_pin) if friction else 0.0,
        chain_pin_friction=float(m.friction_chain_pin) if friction else 0.0, bumper=bumper, bumper_travel=bumper_travel,
        bumper_damping=2.0 * bumper_share * math.sqrt(bumper * mass), stop_stiffness=stop_stiffness,
        stop_damping=2.0 * stop_share * math.sqrt(stop_stiffness * inertia), caught_at=caught_at,
    )  # fmt: skip


@st.composite
def released(draw: st.DrawFn, friction: bool = True) -> tuple[Linkage, Scene]:
    """A machine that can exist and its release, with all that loses energy: 3 to 20 m/s, a link much lighter than the mass
    or nearly as heavy, a line that stretches by a percent of the stroke up to a tenth of it, with a bumper or without;
    some run against the stop's back before they are straight."""
    m = draw(machines(friction=friction))
    at = cycle(m)
    draw_, force = float(at.most_pull), float(at.largest_tension)
    mass = float(at.stored_energy) / (draw(st.floats(3e3, 2e4)) ** 2 / 2.0)
    share = draw(st.sampled_from([0.0, 0.3, 0.8]))
    payload, moved = share * mass, (1.0 - share) * mass
    travel = draw(st.floats(0.1, 0.3)) * draw_
    bumper = draw(st.sampled_from([0.0, 2.0, 6.0])) * force / draw_
    k = scene_of(
        m, mass=moved, payload=payload, leaves_at=travel, link_mass=draw(st.floats(0.03, 0.8)) * moved,
        stiffness=force / (draw(st.floats(0.01, 0.1)) * draw_), line_damping=draw(st.floats(0.02, 0.2)), friction=friction,
        speed=draw(st.floats(0.3, 3.0)), bumper=bumper, bumper_travel=travel if bumper else 0.0,
        bumper_share=draw(st.floats(0.1, 0.5)), gravity=draw(st.sampled_from([0.0, 9810.0, -9810.0])) * 0.3,
        stop_stiffness=100.0 * force * float(m.link_length), back=draw(st.sampled_from([math.radians(330.0), 2.0])),
    )  # fmt: skip
    caught = not bumper and draw(st.booleans())
    return m, replace(k, caught_at=0.0) if caught else k


def scenes() -> st.SearchStrategy[Scene]:
    return released().map(lambda pair: pair[1])
