"""The release once more in an engine for rigid bodies that knows nothing of this project: MuJoCo.

There the disc is a body of huge inertia that turns on, the link hangs on it by a hinge, the line is a tendon over a
cylinder (or through a far point), slack within a range of lengths, and the mass slides against a spring. Without friction
and damping, as a tendon's damper would push. m, kg, s there; mm, t, s here.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import mujoco
import numpy as np
import pytest

import loads.release.simulate as simulate_
from loads.linkage import Linkage
from loads.release.scene import SOLID, Scene
from loads.release.simulate import simulate, start
from parts.design import Floats
from tests.loads.machines import linear, machine, run_of
from tests.loads.release_scenes import FREE, scene_of

STEP = 2.5e-6  # s: a thousandth of the shortest period, that of the link on the line
M = 1e-3  # a millimetre
# Both integrate the same equations but for the disc, which there is heavy and not held; what is left are the steps
# (fourth order there) and that they do not end where a force sets in. A thousandth leaves room for that.
AGREE = 1e-3
HEAVY = 1e7  # kg m², of the disc there: the whole release changes its speed by a millionth


NEAR = machine(58, 86, 70, 3, (460, 30), 80, 1, linear(2100, 132), exit_angle=math.radians(-90.0))
FAR = machine(60, 90, 80, 2, (1e5, 0), 0, 1, linear(4000, 80))
CW = machine(58, 86, 70, 3, (460, -30), 80, -1, linear(2100, 132), exit_angle=math.radians(90.0), turn=-1.0)


@dataclass(frozen=True)
class Case:
    machine: Linkage
    preload: float
    rate: float
    mass: float
    payload: float
    link_mass: float
    leaves_at: float
    bumper: float = 0.0

    @property
    def scene(self) -> Scene:
        travel = 40.0 if self.bumper else 0.0
        return scene_of(
            self.machine, mass=self.mass, payload=self.payload, leaves_at=self.leaves_at, link_mass=self.link_mass,
            stiffness=3000.0, speed=1.5, back=FREE, bumper=self.bumper, bumper_travel=travel, bumper_share=0.0,
        )  # fmt: skip


CASES = {
    # a payload that leaves at the bumper; the bumper stops the rest, then the link snatches
    "near": Case(NEAR, 2100.0, 132.0, mass=8e-3, payload=8e-3, link_mass=2e-3, leaves_at=40.0, bumper=1500.0),
    # no bumper: the straight link stops the mass
    "far": Case(FAR, 4000.0, 80.0, mass=6e-3, payload=6e-3, link_mass=2e-3, leaves_at=60.0),
    # a heavy link, the mirror image of the first machine
    "heavy, clockwise": Case(CW, 2100.0, 132.0, mass=4e-3, payload=9e-3, link_mass=6e-3, leaves_at=50.0),
}


def vector(x: float, y: float) -> str:
    return f"{x * M:.12g} {y * M:.12g} 0"


def model_of(case: Case, k: Scene) -> mujoco.MjModel:
    """The scene as MJCF, in the chain frame. The slide's coordinate is the draw."""
    run = run_of(case.machine)
    t0, radius, w, wrap = (float(v) for v in (run.distance, run.pitch_radius, run.wrap_side, run.start_wrap))
    if radius == 0.0:
        wrap = math.pi / 2.0
    leave = -w * wrap
    normal = w * math.pi / 2.0 + leave
    middle = w * (math.pi - wrap) / 2.0
    end = (
        t0 + radius * math.cos(normal) + 1000.0 * math.cos(leave),
        -w * radius + radius * math.sin(normal) + 1000.0 * math.sin(leave),
    )
    side = vector(t0 + 2.0 * radius * math.cos(middle), -w * radius + 2.0 * radius * math.sin(middle))
    over = '<geom geom="sheave" sidesite="side"/>' if radius > 0.0 else '<site site="point"/>'
    c = k.first_moment / k.link_mass
    turning = (k.inertia - k.first_moment * c) * 1e-3  # about its middle, t mm² to kg m²
    text = f"""
<mujoco>
  <option timestep="{STEP}" integrator="RK4" gravity="0 0 0"><flag contact="disable"/></option>
  <worldbody>
    <site name="side" pos="{side}"/>
    <site name="point" pos="{vector(t0, 0.0)}"/>
    <geom name="sheave" type="cylinder" size="{max(radius, 1.0) * M:.12g} 0.01" pos="{vector(t0, -w * radius)}"/>
    <body name="disc">
      <joint name="disc" type="hinge" axis="0 0 1" armature="{HEAVY}"/>
      <inertial pos="0 0 0" mass="1" diaginertia="1 1 1"/>
      <body name="link" pos="{vector(k.crank_radius, 0.0)}">
        <joint name="link" type="hinge" axis="0 0 1"/>
        <inertial pos="{vector(c, 0.0)}" mass="{k.link_mass * 1e3:.12g}" diaginertia="{turning} {turning} {turning}"/>
        <site name="pin" pos="{vector(k.link_length, 0.0)}"/>
      </body>
    </body>
    <body name="mass" pos="{vector(*end)}">
      <joint name="draw" type="slide" axis="{-math.cos(leave):.12g} {-math.sin(leave):.12g} 0"
             stiffness="{case.rate * 1e3:.12g}" springref="{-case.preload / case.rate * M:.12g}"/>
      <inertial pos="0 0 0" mass="{(k.mass + k.payload) * 1e3:.12g}" diaginertia="1 1 1"/>
      <site name="end"/>
    </body>
  </worldbody>
  <tendon>
    <spatial name="line" stiffness="{k.stiffness * 1e3:.12g}" springlength="0 1">
      <site site="pin"/>{over}<site site="end"/>
    </spatial>
    <fixed name="bumper" stiffness="{k.bumper * 1e3:.12g}" springlength="{k.bumper_travel * M:.12g} 1000">
      <joint joint="draw" coef="1"/>
    </fixed>
    <fixed name="solid" stiffness="{SOLID * k.bumper * 1e3:.12g}" springlength="0 1000">
      <joint joint="draw" coef="1"/>
    </fixed>
  </tendon>
</mujoco>"""
    return mujoco.MjModel.from_xml_string(text)


@dataclass(frozen=True)
class Outside:
    """What the engine finds: of the payload where it leaves, and of line and link over time. mm, N, s."""

    payload_time: float
    payload_speed: float
    time: Floats
    line: Floats
    draw: Floats
    spin: Floats
    torque: Floats  # that the link takes from the disc, N mm

    @property
    def slack(self) -> float:
        return float(self.time[np.argmax(self.line <= 0.0)])


def outside(case: Case, k: Scene, end: float) -> Outside:
    """The scene run to ``end`` (s)."""
    model = model_of(case, k)
    data = mujoco.MjData(model)
    first = start(k)
    # coordinates: disc, link against it, draw
    data.qpos[:] = [k.theta, math.pi + k.front, first.draw * M]
    data.qvel[:] = [k.speed, 0.0, 0.0]
    mujoco.mj_forward(model, data)
    taut = float(data.ten_length[0]) - k.spring(first.draw) / k.stiffness * M
    model.tendon_lengthspring[0] = (0.0, taut)
    rows = []
    payload_time = payload_speed = math.nan
    left = k.payload <= 0.0
    while data.time < end:
        mujoco.mj_step(model, data)
        draw, rate_ = float(data.qpos[2]) / M, float(data.qvel[2]) / M
        if not left and draw <= k.leaves_at:
            left = True
            payload_time, payload_speed = float(data.time), -rate_
            model.body_mass[model.body("mass").id] = model.dof_M0[2] = k.mass * 1e3
        line = k.stiffness * max(0.0, float(data.ten_length[0]) - taut) / M
        rows.append((data.time, line, draw, data.qvel[0] + data.qvel[1], -HEAVY * data.qacc[0] * 1e3))
    time, line, draw, spin, torque = np.array(rows).T
    return Outside(payload_time, payload_speed, time, line, draw, spin, torque)


def first_peak(time: Floats, line: Floats, since: float) -> tuple[float, float]:
    """Of the first pull that begins after a moment: its greatest force and when that is."""
    begins = int(np.argmax((time > since) & (line > 0.0)))
    over = np.flatnonzero(line[begins:] <= 0.0)
    i = begins + int(np.argmax(line[begins : begins + int(over[0])] if over.size else line[begins:]))
    return float(line[i]), float(time[i])


@pytest.mark.parametrize("name", CASES)
def test_the_engine_finds_the_same_release(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    case = CASES[name]
    k = case.scene
    monkeypatch.setattr(simulate_, "LONGEST", 0.06)  # without damping it does not settle
    ours = simulate(k)
    assert ours.payload_speed is not None
    assert ours.payload_time is not None
    assert ours.straight is not None
    line = ours.forces["line"]
    peak, at = first_peak(ours.time, line, ours.straight)
    assert at < 0.055
    theirs = outside(case, k, at + 1e-3)
    assert theirs.payload_speed == pytest.approx(ours.payload_speed, rel=AGREE)
    assert theirs.payload_time == pytest.approx(ours.payload_time, rel=AGREE)
    assert ours.slack_first is not None
    assert theirs.slack == pytest.approx(ours.slack_first, rel=AGREE)
    snatch, when = first_peak(theirs.time, theirs.line, ours.straight)
    assert snatch == pytest.approx(peak, rel=AGREE)
    assert when == pytest.approx(at, rel=AGREE)
    # and all the way, at the moments of our own steps
    on = ours.time <= at
    for mine, other in ((ours.draw, theirs.draw), (ours.psi_rate, theirs.spin)):
        there = np.interp(ours.time[on], theirs.time, other)
        assert np.abs(there - mine[on]).max() <= AGREE * float(np.abs(mine[on]).max())
    # what the link takes from the disc is known there a step late, which tells where the line sets in hard
    torque = ours.forces["torque"][on]
    there = np.interp(ours.time[on], theirs.time, theirs.torque)
    assert np.abs(there - torque).max() <= 5.0 * AGREE * float(np.abs(torque).max())
