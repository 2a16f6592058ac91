"""Member loads: the free bodies of disc, link, pins and stop over crank angle, couples across the stack included.

Each history is for ONE part as made: shock factor in, and where a twin stack has two of a part, the load share. The
twin's values are those of the side behind the chain; in front of it the out-of-plane moments change their sign.

Statics throughout: forces and moments of each body add up to nothing, which the tests hold over random designs.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from loads.cycle import Cycle, corner_angles, trace_angles
from loads.linkage import Linkage, State, state
from loads.records import (
    CASES,
    FIRST_HALF,
    HOLD,
    RELEASE,
    SECOND_HALF,
    SNATCH,
    FarSite,
    LoadRow,
    SiteHistory,
)
from loads.release.rows import ReleaseState, joined
from parts.design import Floats, Targets
from parts.stack import Stack


@dataclass(frozen=True)  # without slots, so that what is asked for twice is worked out once
class History:
    """One design's state over crank angle, with the rows that belong to each case.

    The angles of the winding hold each step, each event, each refined peak and each corner of the spring, so that a
    worst case is the worst, or within half a degree of it where nothing has a peak of its own. Where the release is
    known its moments follow as more rows.
    """

    machine: Linkage
    figures: Cycle
    winding: State
    hold_index: int
    release: ReleaseState | None = None
    snatches: NDArray[np.bool_] | None = None  # of the release's rows, those of the snatch

    @cached_property
    def state(self) -> State:
        return self.winding if self.release is None else joined(self.winding, self.release)

    @cached_property
    def cases(self) -> tuple[str, ...]:
        """Those that there are, in order."""
        return CASES if self.release is None else (*CASES, RELEASE, SNATCH)

    def over(self, winding: float, release: float = 1.0) -> Floats:
        """A factor for each row: that of the winding, and that of the release."""
        found = np.full(self.state.crank_angle.size, winding)
        found[self.winding.crank_angle.size :] = release
        return found

    def rows(self, case: str) -> NDArray[np.intp]:
        """Indices of the rows that belong to a case."""
        theta, catch = self.winding.crank_angle, float(self.figures.events.catch)
        if case == FIRST_HALF:
            return np.flatnonzero(theta <= catch)
        if case == SECOND_HALF:
            return np.flatnonzero(theta > catch)
        if case == HOLD or self.snatches is None:
            return np.array([self.hold_index])
        return theta.size + np.flatnonzero(self.snatches == (case == SNATCH))

    def case_at(self, index: int) -> str:
        """The case that a row belongs to; the hold has a name of its own."""
        if self.snatches is not None and index >= self.winding.crank_angle.size:
            return SNATCH if bool(self.snatches[index - self.winding.crank_angle.size]) else RELEASE
        if index == self.hold_index:
            return HOLD
        return SECOND_HALF if bool(self.winding.seated[index]) else FIRST_HALF

    def worst(self, demand: Floats, case: str) -> int:
        rows = self.rows(case)
        here = demand[rows]
        # of angles that are equally bad to a rounding's width the first, so that noise does not choose
        return int(rows[np.argmax(here >= here.max() * (1.0 - 1e-9))])


def history(machine: Linkage, figures: Cycle) -> History:
    """State of one design at all angles that matter."""
    extra = [figures.largest_crank_pin_at, figures.largest_stop_at, figures.largest_link_bending_at]
    extra += [figures.largest_tension_at, np.nextafter(figures.events.catch, np.inf)]
    end = float(figures.events.release)
    corners = corner_angles(machine, figures)
    theta = np.unique(np.concatenate([trace_angles(figures), corners, [float(x) for x in extra]]))
    theta = theta[theta <= end]
    hold_index = int(np.argmin(np.abs(theta - float(figures.events.hold))))
    return History(machine, figures, state(machine, theta, figures.events.catch), hold_index)


def _vector(x: Floats, y: Floats) -> Floats:
    return np.stack([x, y, np.zeros_like(x)])


def _couple(depth: float, force: Floats) -> Floats:
    """Moment (3, n) of a force that acts ``depth`` mm further along z."""
    return np.stack([-depth * force[1], depth * force[0], np.zeros_like(force[0])])


def _turned(vector: Floats, angle: Floats) -> Floats:
    """Components of a chain-frame vector in a frame that stands at ``angle`` (rad) to it."""
    c, s = np.cos(angle), np.sin(angle)
    return np.stack([vector[0] * c + vector[1] * s, -vector[0] * s + vector[1] * c, vector[2]])


@dataclass(frozen=True, slots=True)
class Members:
    """Forces of one design over crank angle in the chain frame, shock factor included. Shapes (3, n).

    ``*_side`` are what one side of the stack is checked for, the others are of the whole machine.
    """

    chain_on_pin: Floats  # T·u
    chain_side: Floats
    stop_on_link: Floats  # N·n, one side
    pin_on_link: Floats  # one side
    on_disc: Floats  # what pin and stop put on the disc, one side: the chain's pull, but for the link's inertia
    inertia_on_link: Floats  # at the stop's reach, one side: what swinging the link takes; none while winding
    chain_couple: Floats  # moment of the chain's offset about the link's middle, one side
    spring_pull: Floats  # on the sheave, F along the exit direction
    friction_torque: Floats
    torque: Floats
    torque_side: Floats


def members(past: History, stack: Stack, targets: Targets) -> Members:
    """Forces with shock and share, from the frictionless state."""
    s, shock = past.state, past.over(targets.shock_factor)
    share = stack.load_share
    chain = _vector(-s.shaft_x, -s.shaft_y) * shock
    pin = _vector(s.pin_x, s.pin_y) * shock * share
    side = chain * share
    push = s.stop_force * shock * share
    stop = _vector(-push * np.sin(s.link_direction), push * np.cos(s.link_direction))
    return Members(
        chain_on_pin=chain,
        chain_side=side,
        stop_on_link=stop,
        pin_on_link=pin,
        on_disc=-pin - stop,
        inertia_on_link=_swinging(past, side, stop, pin),
        chain_couple=_couple(stack.chain_offset, side),
        spring_pull=_vector(s.sheave_x, s.sheave_y) * shock + chain,
        friction_torque=s.friction_torque * shock,
        torque=s.torque * shock,
        torque_side=s.torque * shock * share,
    )


def _swinging(past: History, side: Floats, stop: Floats, pin: Floats) -> Floats:
    """Force (3, n) at the stop's reach that balances chain and stop about the crank pin, and all of them along the link.

    So the link's inertia is taken where the stop would be; that of a real link lies about there and bends it less.
    """
    m, psi = past.machine, past.state.link_direction
    nx, ny = -np.sin(psi), np.cos(psi)
    across = side[0] * nx + side[1] * ny
    seat = stop[0] * nx + stop[1] * ny
    total = side + stop + pin
    none = past.over(0.0)  # while winding there is none but of rounding
    left = (-across * float(m.link_length) / float(m.stop_reach) - seat) * none
    along = (total[1] * nx - total[0] * ny) * none
    return _vector(left * nx + along * ny, left * ny - along * nx)


def in_link_frame(past: History, force: Floats) -> Floats:
    """Forces (3, n) of the chain frame in the link's."""
    flip = np.array([[1.0], [float(past.machine.turn)], [1.0]])
    return np.asarray(_turned(force, past.state.link_direction) * flip)


def _rank(force: Floats) -> Floats:
    return np.asarray(np.linalg.norm(force, axis=0))


def site_histories(
    past: History, stack: Stack, targets: Targets, bolt_radius: float, far: tuple[FarSite, ...]
) -> tuple[SiteHistory, ...]:
    """Loads at every site of every part, (3, n) each, in the part's frame; ``far`` are the sites of the far end."""
    s, m = past.state, past.machine
    f = members(past, stack, targets)
    turn = float(m.turn)
    none = np.zeros_like(f.chain_side)
    # forces act in the link's middle; the chain lies ``away`` mm nearer the viewer on the side behind the chain
    arm_disc = stack.disc_middle - stack.link_middle
    arm_back = stack.disc_back - stack.link_middle

    def mirrored(force: Floats, moment: Floats) -> tuple[Floats, Floats]:
        """A clockwise machine is the mirror image about the x axis: y of forces, x and z of moments change sign."""
        flip = np.array([[1.0], [turn], [1.0]])
        return force * flip, moment * turn * flip

    def in_disc(part: str, site: str, force: Floats, moment: Floats, demand: Floats | None = None) -> SiteHistory:
        a = s.crank_angle
        fm = mirrored(_turned(force, a), _turned(moment, a))
        return SiteHistory(part, site, "disc", *fm, _rank(force) if demand is None else demand)

    def in_link(part: str, site: str, force: Floats, moment: Floats, demand: Floats | None = None) -> SiteHistory:
        a = s.link_direction
        fm = mirrored(_turned(force, a), _turned(moment, a))
        return SiteHistory(part, site, "link", *fm, _rank(force) if demand is None else demand)

    def in_machine(part: str, site: str, force: Floats, moment: Floats, demand: Floats | None = None) -> SiteHistory:
        a = np.full_like(s.crank_angle, -float(m.start_direction) * turn)
        fm = mirrored(_turned(force, a), _turned(moment, a))
        return SiteHistory(part, site, "machine", *fm, _rank(force) if demand is None else demand)

    pin_root = _couple(arm_disc, -f.pin_on_link) + f.chain_couple
    stop_root = _couple(arm_disc, -f.stop_on_link)
    tilt = _couple(arm_back, f.on_disc) + f.chain_couple
    twist = np.stack([np.zeros_like(f.torque), np.zeros_like(f.torque), f.torque])
    twist_side = np.stack([np.zeros_like(f.torque), np.zeros_like(f.torque), f.torque_side])
    bolts = np.sqrt(_rank(f.on_disc) ** 2 + (_rank(tilt)[:] / bolt_radius) ** 2 + (f.torque_side / bolt_radius) ** 2)
    sheave = f.spring_pull - f.chain_on_pin
    # friction of the sheave or the guide: what the two legs leave over is a couple on its pin
    rubbing = m.far.rubbing(s.line, _rank(f.chain_on_pin), _rank(f.spring_pull))
    rub = np.stack([np.zeros_like(rubbing), np.zeros_like(rubbing), rubbing])
    of_far_end = {"pull": (f.chain_on_pin, none), "back": (-f.chain_on_pin, none), "guide": (sheave, rub)}
    whole = twist + np.stack([np.zeros_like(f.torque), np.zeros_like(f.torque), f.friction_torque])
    return (
        in_disc("crank_disc", "crank_pin_hole", -f.pin_on_link, pin_root),
        in_disc("crank_disc", "stop_seat", -f.stop_on_link, stop_root),
        in_disc("crank_disc", "hub_face", -f.on_disc, twist_side - tilt, bolts),
        in_link("swing_link", "crank_pin_eye", f.pin_on_link, -f.chain_couple),
        in_link("swing_link", "chain_pin_eye", f.chain_side, f.chain_couple),
        in_link("swing_link", "stop_flank", f.stop_on_link, none),
        in_disc("stop", "contact", -f.stop_on_link, none),
        in_disc("stop", "root", f.stop_on_link, -stop_root),
        in_disc("crank_pin", "journal", -f.pin_on_link, f.chain_couple),
        in_disc("crank_pin", "root", f.pin_on_link, -pin_root, _rank(pin_root)),
        in_link("chain_pin", "journal", f.chain_on_pin, none),
        in_link("chain_pin", "link_seat", -f.chain_side, -f.chain_couple),
        *(in_machine(site.part, site.site, *of_far_end[site.force]) for site in far if site.part != "frame"),
        in_machine("main_bearing", "hub_face", f.on_disc, tilt - twist_side, bolts),
        in_machine("spring_anchor", "anchor", -f.spring_pull, none),
        in_machine("frame", "main_bearing", f.on_disc / stack.load_share, none),
        *(in_machine(site.part, site.site, *of_far_end[site.force]) for site in far if site.part == "frame"),
        in_machine("frame", "spring_anchor", -f.spring_pull, none),
        in_machine("frame", "drive", none, -whole, np.abs(f.torque + f.friction_torque)),
    )


def load_rows(past: History, sites: tuple[SiteHistory, ...]) -> tuple[LoadRow, ...]:
    """One row a site and case, at the crank angle where the site's demand is greatest."""
    rows = []
    for site in sites:
        for case in past.cases:
            i = past.worst(site.demand, case)
            force = (float(site.force[0, i]), float(site.force[1, i]), float(site.force[2, i]))
            moment = (float(site.moment[0, i]), float(site.moment[1, i]), float(site.moment[2, i]))
            rows.append(
                LoadRow(site.part, site.site, case, float(past.state.crank_angle[i]), site.frame, force, moment, i)
            )
    return tuple(rows)
