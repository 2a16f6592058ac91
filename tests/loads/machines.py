"""Machines for the tests: the five of the check table, and random ones."""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from loads.lines import SheaveRun
from loads.linkage import Linkage, make_linkage
from loads.spring_law import SpringLaw


def run_of(m: Linkage) -> SheaveRun:
    """The sheave of a machine that has one."""
    assert isinstance(m.far, SheaveRun)
    return m.far


def linear(preload: float, rate: float) -> SpringLaw:
    return SpringLaw(np.asarray(float(preload)), np.asarray(float(rate)))


def machine(
    r: float,
    length: float,
    reach: float,
    beta: float,
    center: tuple[float, float],
    radius: float,
    side: float,
    spring: SpringLaw,
    slack: float = 0.0,
    **more: float,
) -> Linkage:
    return make_linkage(
        crank_radius=r, link_length=length, stop_reach=reach, seat_angle=np.radians(beta), sheave_x=center[0],
        sheave_y=center[1], pitch_radius=radius, wrap=side, spring=spring, slack=slack, **more,
    )  # fmt: skip


FAR = (1e7, 0.0)
TABLE: dict[str, Linkage] = {
    "far": machine(60, 90, 80, 0, FAR, 0, 1, linear(0, 100)),
    "far+3": machine(60, 90, 80, 3, FAR, 0, 1, linear(0, 100)),
    "far-3": machine(60, 90, 80, -3, FAR, 0, 1, linear(0, 100)),
    "near": machine(55, 85, 70, 2, (420, 20), 45, 1, linear(500, 180), slack=4),
    "up": machine(30, 46, 38, 4, (0, 300), 25, 1, linear(1200, 0)),
}


@st.composite
def machines(draw: st.DrawFn, friction: bool = False) -> Linkage:
    """A machine that can exist: the sheave out of the chain pin's reach, a spring that pulls, either rotation and wrap."""
    r = draw(st.floats(15, 120))
    length = r * draw(st.floats(1.15, 2.2))
    radius = draw(st.floats(0.2, 1.2)) * r
    distance = (r + length + radius) * draw(st.floats(1.3, 6.0))
    bearing = draw(st.floats(-np.pi, np.pi))
    stiff = draw(st.floats(0, 300))
    preload = draw(st.floats(1, 2000))
    if draw(st.booleans()):
        spring = linear(preload, stiff)
    else:
        draws = np.array([0.0, 0.2, 0.7, 3.0]) * length
        forces = preload + np.cumsum([0.0, *draw(st.tuples(*[st.floats(0, 9000)] * 3))])
        spring = SpringLaw(np.asarray(0.0), np.asarray(0.0), draws, forces)
    return machine(
        r, length, length * draw(st.floats(0.55, 0.95)), draw(st.floats(-5, 8)),
        (distance * np.cos(bearing), distance * np.sin(bearing)), radius, draw(st.sampled_from([-1.0, 1.0])), spring,
        slack=draw(st.sampled_from([0.0, 0.0, 3.0])), turn=draw(st.sampled_from([-1.0, 1.0])),
        efficiency=draw(st.floats(0.8, 1.0)), friction_bearing=1.5 if friction else 0.0,
        friction_crank_pin=0.8 if friction else 0.0, friction_chain_pin=0.7 if friction else 0.0,
    )  # fmt: skip
