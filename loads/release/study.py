"""The study of the release: what it gives the payload, what it does to the parts, and whether it is covered at all.

mm, s, N, N·mm, rad, kg.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from loads.checks.context import COMMON, Context
from loads.linkage import Linkage
from loads.members import History
from loads.records import Check
from loads.release.bodies import own_speed, scene
from loads.release.rows import moments_of, release_state
from loads.release.scene import Scene
from loads.release.simulate import LOST_COUNT, Course, simulate
from parts.design import Assumed, Moving
from parts.problems import Problem
from parts.quantities import Units, in_brief
from parts.records import Defaults
from parts.stop_back import back_contact

MODEL = "rigid bodies, line as spring and damper; Dormand-Prince integration"
MOST_LEFT = 0.1  # of the mass's greatest energy; common practice, no source
BEFORE_STRAIGHT = "the bumper stops the mass before the link has straightened"


@dataclass(frozen=True)
class ReleaseStudy:
    """``course`` is None where nothing could be simulated; ``why`` says what is missing then."""

    covered: bool
    why: str
    stopped_elsewhere: bool
    speed: float | None = None  # of the disc
    speed_from_spring: bool = False
    scene: Scene | None = None
    course: Course | None = None
    assumed: tuple[Assumed, ...] = ()
    checks: tuple[Check, ...] = ()
    cautions: tuple[str, ...] = ()
    dry_snatch: float | None = None  # N, of a shot without its payload; None where there is none, or it does not settle
    bumper_used: float = 0.0  # mm of its travel, beyond it where it bottoms

    @property
    def swing_tension(self) -> float:
        """Greatest pull of the line before it first goes slack or the link has straightened."""
        return self._most("tension", late=False)

    @property
    def snatch(self) -> float:
        return self._most("tension", late=True)

    @property
    def snatch_torque(self) -> float:
        """Greatest torque on the disc, either way, from then on."""
        return self._most("torque", late=True)

    @property
    def blow(self) -> float:
        """Greatest force (N) between link and stop, at the stop's reach."""
        if self.course is None or self.scene is None:
            return 0.0
        return float(np.abs(self.course.forces["stop"]).max()) / self.scene.reach

    @property
    def stretched(self) -> float:
        """Static stretch (mm) of the line at the start."""
        return 0.0 if self.course is None else float(self.course.forces["stretch"][0])

    @property
    def efficiency(self) -> float | None:
        """Energy given to the payload over what the spring held."""
        if self.course is None or self.course.payload_speed is None:
            return None
        return self.course.given_to_payload / self.course.stored_at_start

    def _most(self, name: str, late: bool) -> float:
        if self.course is None:
            return 0.0
        values = np.abs(self.course.forces[name])[(self.course.time >= self.course.turn) == late]
        return float(values.max()) if values.size else 0.0


def release_problems(c: Context) -> tuple[Problem, ...]:
    """A release that cannot be: a payload or a bumper beyond the draw, a disc that stands still with nothing to turn it."""
    moving = c.design.moving
    if moving is None or moving.mass <= 0.0:
        return ()
    drawn = float(c.past.winding.draw[-1])
    found = [
        Problem(key, None, f"{value:.6g} mm", f"less than the draw at the release, {drawn:.6g} mm", text)
        for key, value, text in (
            ("moving.payload_leaves_at", moving.payload_leaves_at, "the payload would leave before it is let go"),
            ("moving.bumper_travel", moving.bumper_travel, "the bumper would act before anything moves"),
        )
        if value is not None and value >= drawn
    ]
    if not moving.disc_speed and own_speed(c) is None:
        text = "the release with a still disc is an unstable balance; the spring gives it no speed of its own here"
        found.append(Problem("moving.disc_speed", None, "nothing", "the speed at which the drive turns the disc", text))
    return tuple(found)


def release_study(c: Context) -> ReleaseStudy:
    """What is known of the release; checks are those of the study itself, not of the parts."""
    moving = c.design.moving
    if moving is None or moving.mass <= 0.0:
        elsewhere = moving is not None and moving.stopped_elsewhere
        why = "the design gives no [moving] mass" if moving is None else "the moving mass is not given"
        return _not_covered(why, elsewhere)
    own = own_speed(c) if not moving.disc_speed else None
    speed = moving.disc_speed or own
    if speed is None:
        return _not_covered("the disc's speed at the release is not known", moving.stopped_elsewhere)
    defaults = Defaults()
    if own is not None:
        defaults.assumed.append(
            Assumed("moving.disc_speed", own, "speed", "what the spring gives the disc from the null on")
        )
    k = scene(c, moving, speed, back_contact(c.parts, c.design, c.sizes).link_angle, defaults)
    course = simulate(k)
    if not course.sound:
        return _not_covered(_unsettled(course, own), moving.stopped_elsewhere)
    used = max(0.0, k.bumper_travel - float(course.draw.min())) if k.bumper > 0.0 else 0.0
    study = ReleaseStudy(
        True, "", moving.stopped_elsewhere, speed, own is not None, k, course, tuple(defaults.assumed), bumper_used=used,
    )  # fmt: skip
    return replace(study, checks=_checks(study, moving), cautions=_cautions(study, moving))


def with_dry_shot(study: ReleaseStudy, units: Units) -> ReleaseStudy:
    """What a shot without its payload would do to the line; it is said, but is in no load."""
    k = study.scene
    if k is None or k.payload <= 0.0:
        return study
    course = simulate(replace(k, payload=0.0))
    dry = replace(study, course=course).snatch if course.sound else None
    if dry is None:
        text = "A shot without the payload was not covered: never fire dry."
    else:
        text = (
            f"A shot without the payload snatches with {in_brief(dry, 'force', units, 4)}, against "
            f"{in_brief(study.snatch, 'force', units, 4)} with it, and is in none of the loads: never fire dry."
        )
    return replace(study, dry_snatch=dry, cautions=(*study.cautions, text))


def _unsettled(course: Course, own: float | None) -> str:
    """Why there are no numbers; ``own`` is the disc's speed (rad/s) where the spring alone gives it."""
    if course.energy_error > LOST_COUNT:
        return f"the simulation lost count of {course.energy_error:.2%} of the energy"
    said = (
        f"the motion did not settle within {float(course.time[-1]):.2f} s: {course.left_over:.0%} of the energy is left"
    )
    if own is not None:
        return (
            f"{said}, and the disc, which the spring alone turns with {own * 30.0 / math.pi:.0f} rpm, has gone on too far; "
            "give the drive's disc_speed"
        )
    return f"{said}; a bumper, or more bumper_damping or line_damping, brings it to rest"


def _not_covered(why: str, elsewhere: bool) -> ReleaseStudy:
    words = f"THE RELEASE IS NOT COVERED: {why}. What swing and snatch do to the parts is in none of these loads."
    row = Check(
        "assembly", "release", "release is covered", "release", None, 1.0, 0.0, "1", 1.0,
        "masses, line and bumper in [moving]; or stopped_elsewhere = true where the chain need not stop the mass", COMMON,
        why,
    )  # fmt: skip
    return ReleaseStudy(False, why, elsewhere, checks=() if elsewhere else (row,), cautions=(words,))


def _checks(s: ReleaseStudy, moving: Moving) -> tuple[Check, ...]:
    course, k = s.course, s.scene
    assert course is not None
    assert k is not None
    if moving.stopped_elsewhere:
        return ()
    rows = []
    # what the mass still has of its speed when the line first holds the link that has swung through
    held = course.straight is not None and (course.time >= course.straight) & (course.forces["line"] != 0.0)
    before = course.time <= (float(course.time[np.argmax(held)]) if np.any(held) else math.inf)
    top = float(np.abs(course.draw_rate).max())
    left = float(np.abs(course.draw_rate[before][-1])) / top if top > 0.0 else 0.0
    rows.append(
        Check(
            "assembly", "release", BEFORE_STRAIGHT, "release", float(course.theta[before][-1]), left**2, MOST_LEFT, "1", 1.0,
            "at most a tenth of its greatest energy is left when the line first pulls on the link swung through", COMMON,
            "" if k.bumper > 0.0 else "there is no bumper: give bumper_stiffness and bumper_travel, or stopped_elsewhere",
        )
    )  # fmt: skip
    if k.bumper > 0.0:
        rows.append(
            Check(
                "bumper", "travel", "stays within its travel", "release", None, s.bumper_used, k.bumper_travel, "mm", 1.0,
                MODEL, "the bumper's maker, as given in the design",
            )
        )  # fmt: skip
    return tuple(rows)


def _cautions(s: ReleaseStudy, moving: Moving) -> tuple[str, ...]:
    course = s.course
    assert course is not None
    rows = []
    if moving.stopped_elsewhere:
        rows.append(
            "The release counts on something else that stops the moving mass at zero draw (stopped_elsewhere): that is "
            "not part of this design and was not checked."
        )
    if course.payload_speed is not None:
        rows.append(
            f"At the release the payload leaves with {course.payload_speed / 1000.0:.3g} m/s, "
            f"{1000.0 * (course.payload_time or 0.0):.0f} ms after the link lifts off."
        )
    return tuple(rows)


def with_release(machine: Linkage, past: History, study: ReleaseStudy) -> History:
    """The history with the moments of the release behind those of the winding, where the release is covered."""
    if study.course is None:
        return past
    rows, late = moments_of(study.course)
    return replace(past, release=release_state(machine, study.course, rows), snatches=late)
