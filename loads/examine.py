"""From a design file to everything that is known of the machine: one record, made without the solid modeller."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path

import numpy as np

from loads.catalogue import load_catalogue
from loads.cautions import cautions, chain_cautions
from loads.chain_study import ChainStudy, chain_study
from loads.checks import all_checks
from loads.checks.context import Context
from loads.cycle import Cycle, cycle
from loads.far_ends.registry import behaviour, linkage_of
from loads.linkage import Linkage, State, chain_line, free_line, state
from loads.members import History, history, load_rows, members, site_histories
from loads.proportions import SPIGOT, proportion
from loads.records import Check, LoadRow, SiteHistory
from loads.refusals import given_size_problems, mechanism_problems, proportioned_size_problems
from loads.release.study import ReleaseStudy, release_problems, release_study, with_dry_shot, with_release
from loads.studies import Study, assumed_by
from loads.studies.registry import run_studies
from parts.catalogue import Catalogue
from parts.clash import Findings, Sweep, sweep
from parts.design import Assumed, Design, Floats
from parts.outline import Part
from parts.problems import DesignRefused, Problem
from parts.read import read_design
from parts.registry import make_parts
from parts.sizes import Sizes
from parts.stack import Stack

SWEEP_STEP = np.radians(2.0)
ROUNDS = 3  # in which sizes and release are made to agree


@dataclass(frozen=True, slots=True)
class Examination:
    """A design examined. ``loads`` and ``checks`` are the bill; ``holds`` is the verdict."""

    design: Design
    machine: Linkage
    figures: Cycle
    past: History
    sizes: Sizes
    stack: Stack
    parts: tuple[Part, ...]
    sites: tuple[SiteHistory, ...]
    loads: tuple[LoadRow, ...]
    checks: tuple[Check, ...]
    findings: Findings
    chain: ChainStudy | None  # None for a tie
    assumed: tuple[Assumed, ...]
    cautions: tuple[str, ...]
    studies: Mapping[str, Study] = field(default_factory=dict)  # those that ran, by name

    @property
    def holds(self) -> bool:
        return all(row.holds for row in self.checks)

    @property
    def falls_short(self) -> tuple[Check, ...]:
        """The checks that miss their target, the worst first."""
        return tuple(row for row in self.checks if not row.holds)


def examine(path: Path) -> Examination:
    """Read, solve, size, load and check the design in a file.

    Raises ``DesignRefused`` with every problem at once: those of the file and those of the mechanism.
    """
    catalogue = load_catalogue()
    reading = read_design(path, catalogue)
    problems: tuple[Problem, ...] = reading.problems
    design = reading.design
    if design is None:
        raise DesignRefused(path, problems)
    machine = linkage_of(design)
    figures = cycle(machine)
    found = (*mechanism_problems(design, figures), *given_size_problems(design, catalogue))
    problems += tuple(replace(p, line=reading.locate(p.key)) for p in found)
    if problems:
        raise DesignRefused(path, problems)

    def refuse(problems: tuple[Problem, ...]) -> None:
        if problems:
            raise DesignRefused(path, tuple(replace(p, line=reading.locate(p.key)) for p in problems))

    solved, release = _with_release(design, machine, figures, catalogue, refuse)
    context, machine, sizes, stack = solved.context, solved.machine, solved.context.sizes, solved.context.stack
    sites = tuple(context.sites.values())
    studies = {"release": release, **run_studies(context)}
    checks = all_checks(context, tuple(row for study in studies.values() for row in study.checks))
    chain = chain_study(design, machine, figures, context.past, sizes)
    return Examination(
        design=design, machine=machine, figures=figures, past=context.past, sizes=sizes, stack=stack,
        parts=context.parts, sites=sites, loads=load_rows(context.past, sites), checks=checks,
        findings=context.findings, chain=chain,
        assumed=(
            *_as_solved(design, machine, len(stack.sides) > 1), *solved.rubbing, *solved.proportioned,
            *assumed_by(studies.values()),
        ),
        cautions=(
            *(() if release.covered else release.cautions),  # first of all
            *cautions(design, figures, sizes, checks),
            *chain_cautions(design.far_end.noun, chain),
            *(text for study in studies.values() if study is not release or release.covered for text in study.cautions),
        ),
        studies=studies,
    )  # fmt: skip


@dataclass(frozen=True, slots=True)
class _Settled:
    """A design with its sizes settled, and what was assumed on the way; the context has no studies in it yet."""

    machine: Linkage
    context: Context
    rubbing: tuple[Assumed, ...]
    proportioned: tuple[Assumed, ...]


def _with_release(
    design: Design,
    machine: Linkage,
    figures: Cycle,
    catalogue: Catalogue,
    refuse: Callable[[tuple[Problem, ...]], None],
) -> tuple[_Settled, ReleaseStudy]:
    """Sizes settled for winding and release, and the release of those sizes, its loads in the context."""
    plain = history(machine, figures)
    solved = _settle(design, machine, figures, plain, catalogue)
    refuse(proportioned_size_problems(design, solved.context.sizes))
    refuse(release_problems(solved.context))
    release = release_study(solved.context)
    for _ in range(ROUNDS):
        past = with_release(solved.machine, solved.context.past, release)
        if past.release is None:
            return solved, release
        # what the release does to the parts may ask for larger ones, and those change the release
        loaded = replace(plain, release=past.release, snatches=past.snatches)
        again = _settle(design, machine, figures, loaded, catalogue)
        if again.context.sizes == solved.context.sizes:
            break
        refuse(release_problems(again.context))
        solved, release = again, release_study(again.context)
    past = with_release(solved.machine, solved.context.past, release)
    release = with_dry_shot(release, design.identity.units)
    return replace(solved, context=_with_loads(solved.context, past)), release


def _settle(design: Design, machine: Linkage, figures: Cycle, plain: History, catalogue: Catalogue) -> _Settled:
    """Sizes for the loads of ``plain``, then everything that follows from them, of the winding alone."""
    sizes, stack, proportioned = proportion(design, plain, catalogue)
    machine, rubbing = with_friction(design, machine, sizes)
    past = history(machine, figures)
    parts = make_parts(design, sizes, stack)
    findings = sweep(parts, design, sizes, stack, sweep_poses(machine, figures))
    context = Context(
        design=design, sizes=sizes, stack=stack, parts=parts, past=past,
        members=members(past, stack, design.targets), sites={}, findings=findings,
    )  # fmt: skip
    return _Settled(machine, _with_loads(context, past), rubbing, proportioned)


def _with_loads(c: Context, past: History) -> Context:
    """The context with the loads of a history at every site."""
    sites = site_histories(past, c.stack, c.design.targets, c.sizes.disc.bolt_circle / 2.0, behaviour(c.design).sites)
    return replace(
        c, past=past, members=members(past, c.stack, c.design.targets), sites={(s.part, s.site): s for s in sites}
    )


def _as_solved(design: Design, machine: Linkage, shares: bool) -> tuple[Assumed, ...]:
    """What the reading assumed, with the values that only the mechanism gives, and without what plays no part in it."""
    half_a_wrap = float(machine.start_direction) + np.pi
    rows = []
    for row in design.assumed:
        if row.key == "sheave.exit_angle":
            angle = float(np.mod(half_a_wrap + np.pi, 2.0 * np.pi) - np.pi)
            rows.append(replace(row, value=angle, quantity="angle"))
        elif row.key != "targets.load_share" or shares:
            rows.append(row)
    return tuple(rows)


def with_friction(design: Design, machine: Linkage, sizes: Sizes) -> tuple[Linkage, tuple[Assumed, ...]]:
    """The machine with the friction of its joints, now that their radii are known."""
    friction = design.friction
    assumed: tuple[Assumed, ...] = ()
    radius = friction.bearing_radius
    if radius is None:
        shaft = sizes.running.shaft.diameter if sizes.running is not None else sizes.disc.bore / SPIGOT
        radius = shaft / 2.0
        why = "half of the main shaft"
        assumed = (Assumed("friction.bearing_radius", radius, "length", why),)
    full = np.broadcast_to
    return replace(
        machine,
        friction_bearing=full(friction.bearing * radius, machine.shape),
        friction_crank_pin=full(friction.crank_pin * sizes.crank_pin.diameter / 2.0, machine.shape),
        friction_chain_pin=full(friction.chain_pin * sizes.chain_pin.middle_diameter / 2.0, machine.shape),
    ), assumed


@dataclass(frozen=True, slots=True)
class Directions:
    """Directions in the machine frame (rad), one element a crank angle, as the assembly takes them."""

    disc: Floats
    link: Floats
    chain: Floats


def directions(machine: Linkage, s: State) -> Directions:
    """Where disc (O→A), link (A→B) and chain point."""
    start, turn = float(machine.start_direction), float(machine.turn)
    return Directions(
        disc=start + turn * s.crank_angle,
        link=start + turn * s.link_direction,
        chain=start + turn * s.chain_direction,
    )


def free_lengths(machine: Linkage, s: State) -> Floats:
    """Straight from the chain pin to the sheave, or to the output's pin (mm), one element a crank angle."""
    line = chain_line(machine.expanded(), *chain_pin_places(machine, s))
    return np.broadcast_to(line.free_length, s.crank_angle.shape)


def chain_pin_places(machine: Linkage, s: State) -> tuple[Floats, Floats]:
    """B in the chain frame."""
    r, length = float(machine.crank_radius), float(machine.link_length)
    x = r * np.cos(s.crank_angle) + length * np.cos(s.link_direction)
    y = r * np.sin(s.crank_angle) + length * np.sin(s.link_direction)
    return x, y


def sweep_poses(machine: Linkage, figures: Cycle) -> Sweep:
    """Winding from 0 to the release, then the link's swing at the release until it points along the chain again."""
    at = figures.events
    end = float(at.release)
    winding = np.unique(np.concatenate([np.arange(0.0, end, SWEEP_STEP), [float(at.catch), float(at.hold), end]]))
    s = state(machine, winding, at.catch)
    d = directions(machine, s)
    turn, beta = float(machine.turn), float(machine.seat_angle)
    straight = float(np.mod(np.pi + float(free_line(machine, np.asarray(end)).direction) - end, 2.0 * np.pi))
    swing = np.linspace(beta, straight, 1 + round((straight - beta) / float(SWEEP_STEP)))
    disc = np.full_like(swing, d.disc[-1])
    link = disc + turn * (np.pi + swing)
    # in the swing the chain end hangs on the chain pin and points at the sheave
    ax, ay = float(machine.crank_radius) * np.cos(end), float(machine.crank_radius) * np.sin(end)
    bx = ax + float(machine.link_length) * np.cos(end + np.pi + swing)
    by = ay + float(machine.link_length) * np.sin(end + np.pi + swing)
    m = machine.expanded()

    line = chain_line(m, bx, by)
    chain = float(machine.start_direction) + turn * line.direction
    return Sweep(
        crank_angle=np.concatenate([winding, np.full_like(swing, end)]),
        disc_angle=np.concatenate([d.disc, disc]),
        link_angle=np.concatenate([d.link, link]),
        chain_angle=np.concatenate([d.chain, chain]),
        free_length=np.concatenate([free_lengths(machine, s), np.broadcast_to(line.free_length, swing.shape)]),
        taut=np.concatenate([np.ones(len(winding), bool), np.zeros(len(swing), bool)]),
    )
