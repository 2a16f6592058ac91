"""The study of backing off: the machine run backwards, taut and with slack, onto the back of its stop and beyond.

Taut, the link hangs in line with the chain until its other side meets the stop's back. From there link and disc are one
body once more: the mirror image of the machine, with another seat angle, another second arm, and a release of its own.
So that machine is made as one and solved as any other. Source: the geometry of the mechanism. mm, N, N·mm, rad.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from loads.checks.context import Context
from loads.cycle import Cycle, cycle
from loads.linkage import Linkage, state
from loads.records import Check
from loads.reversed_rating import reversed_checks
from loads.slack_poses import SlackPoses, slack_poses
from parts.design import Floats
from parts.quantities import Units, in_brief
from parts.stop_back import BackContact, back_contact

MAP_STEP = math.radians(5.0)  # of the map of slack poses
CURVE_STEP = math.radians(2.0)  # of the pull over crank angle


@dataclass(frozen=True, slots=True)
class BackingOff:
    """What running backwards comes to. Crank angles are negative; None where there is no such thing."""

    contact: BackContact
    taken_up: float  # γ, by which stop and link width shorten the link's turn
    back_contact: float | None  # crank angle at which a taut machine meets the stop's back
    second_arm: float  # |OB| on the stop's back
    carrying_slack: float | None  # from which the back can carry the link outwards; None for a tie
    slack: float
    mirror: Linkage
    reversed_figures: Cycle
    forward_pull: float
    most_draw: float | None
    table_end: float | None
    rated: bool
    poses: SlackPoses
    units: Units
    checks: tuple[Check, ...] = ()

    @property
    def runs(self) -> bool:
        """Whether the machine on its stop's back has a pull, a null and a release of its own."""
        return self.back_contact is not None and math.isfinite(float(self.reversed_figures.events.first_end))

    @property
    def null(self) -> float | None:
        return self._event("null")

    @property
    def release(self) -> float | None:
        return self._event("release")

    @property
    def fires(self) -> float | None:
        """Crank angle from which it goes off in reverse: the first of its null and its release."""
        return self._event("first_end")

    @property
    def pull(self) -> float | None:
        """The most that the reversed machine pulls, up to its release."""
        return float(self.reversed_figures.most_pull) if self.runs else None

    @property
    def draw(self) -> float | None:
        return None if self.pull is None else max(0.0, self.pull - self.slack)

    @property
    def overdraws(self) -> bool:
        """Whether the reversed machine draws the spring further than it bears or its table tells."""
        limits = [limit for limit in (self.most_draw, self.table_end) if limit is not None]
        return self.draw is not None and any(self.draw > limit + 1e-9 for limit in limits)

    @property
    def carries(self) -> bool:
        """Whether the slack there is lets the stop's back carry the link outwards."""
        return self.carrying_slack is not None and self.slack >= self.carrying_slack

    @property
    def cautions(self) -> tuple[str, ...]:
        if self.back_contact is None:
            return ()
        text = f"Run backwards the link meets the back of its stop at {_deg(self.back_contact)} (crank angle)"
        if self.pull is None or self.fires is None:
            rows = [f"{text}." if self.rated else f"{text}: the drive must not be turned further back."]
        else:
            way = in_brief(abs(self.pull - self.forward_pull), "length", self.units)
            than = "more" if self.pull > self.forward_pull else "less"
            goes = f"draws {way} {than} than forwards, and fires in reverse from {_deg(self.fires)}"
            over = ", overdrawing the spring" if self.overdraws else ""
            kept = (
                "It is rated for that." if self.rated else "Nothing is rated for that: an interlock must keep it out."
            )
            rows = [f"{text}. Beyond it {goes}{over}. {kept}"]
        if self.carries and self.carrying_slack is not None:
            slack, least = (in_brief(v, "length", self.units) for v in (self.slack, self.carrying_slack))
            rows.append(
                f"With {slack} of slack the stop's back carries the link outwards when the machine backs off: that "
                f"begins at {least}."
            )
        return tuple(rows)

    def _event(self, name: str) -> float | None:
        return -float(getattr(self.reversed_figures.events, name)) if self.runs else None


def _deg(angle: float) -> str:
    return f"{math.degrees(angle):.1f}°".replace("-", "\N{MINUS SIGN}")


def second_arm(crank_radius: float, link_length: float, link_angle: float) -> float:
    """|OB| = sqrt(r² + L² − 2 r L cos λ) in mm; mm and rad. Source: law of cosines in the triangle O A B.

    >>> second_arm(60.0, 90.0, 0.0)
    30.0
    """
    return math.sqrt(crank_radius**2 + link_length**2 - 2.0 * crank_radius * link_length * math.cos(link_angle))


def carrying_slack(crank_radius: float, link_length: float, arm: float) -> float:
    """r + L − |OB| in mm: with B on the stop's back p is least where OB points along the chain line through O.

    There the chain line from B is that line, whatever the sheave, and p the way from r + L back to |OB|. Less slack than
    that, and the chain holds the link off the back before the back has carried it round. Derived.
    """
    return crank_radius + link_length - arm


def mirrored(machine: Linkage, contact: BackContact) -> Linkage:
    """The machine on its stop's back as one that runs forwards: mirrored along the chain line, crank angles negated.

    Its link angle is 2π − λ, so its seat is 2π − λ at the contact.
    """
    full = np.broadcast_to
    return replace(
        machine,
        seat_angle=full(2.0 * math.pi - contact.link_angle, machine.shape),
        stop_reach=full(contact.reach, machine.shape),
        far=machine.far.mirrored(),
        turn=-machine.turn,
    )


def backing_off_study(c: Context) -> BackingOff:
    """The study of one design; every design has it."""
    m, machine, table = c.design.mechanism, c.past.machine, c.design.spring.table
    contact = back_contact(c.parts, c.design, c.sizes)
    mirror = mirrored(machine, contact)
    figures = cycle(mirror)
    catch = float(figures.events.catch)
    arm = second_arm(m.crank_radius, m.link_length, contact.link_angle)
    study = BackingOff(
        contact=contact, taken_up=m.seat_angle + 2.0 * math.pi - contact.link_angle,
        back_contact=-catch if math.isfinite(catch) else None, second_arm=arm,
        carrying_slack=carrying_slack(m.crank_radius, m.link_length, arm) if c.design.far_end.over_sheave else None,
        slack=float(machine.slack), mirror=mirror, reversed_figures=figures,
        forward_pull=float(c.past.figures.most_pull), most_draw=c.design.spring.most_draw,
        table_end=None if table is None else float(table[0, -1]), rated=m.reverse == "rated",
        poses=slack_poses(machine, contact.link_angle, MAP_STEP), units=c.design.identity.units,
    )  # fmt: skip
    if study.rated and study.runs:
        study = replace(study, checks=reversed_checks(c, mirror, figures, contact))
    return study


def reversed_curve(study: BackingOff) -> tuple[Floats, Floats]:
    """Crank angle (n), falling from 0 to the reversed machine's release, and pull (n)."""
    if not study.runs:
        return np.empty(0), np.empty(0)
    at = study.reversed_figures.events
    end = float(at.release)
    theta = np.unique(np.concatenate([np.arange(0.0, end, CURVE_STEP), [float(at.catch), float(at.null), end]]))
    theta = theta[theta <= end]
    return -theta, state(study.mirror, theta, at.catch).pull
