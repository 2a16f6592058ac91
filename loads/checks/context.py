"""What every family of checks is given: the design with all sizes settled, its parts, its loads over crank angle."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from loads.members import History, Members
from loads.records import Check, SiteHistory
from parts.design import Design, Floats, Material
from parts.outline import Part, Plate
from parts.sizes import Running, Sizes
from parts.stack import Stack

if TYPE_CHECKING:
    from parts.clash import Findings

# names of sources, as they are printed in the bill
AISC_D5 = "AISC 360-16 §D5"
EN_PINS = "EN 1993-1-8:2005 §3.13, table 3.10"
BEAM = "beam theory"
COMMON = "common practice, no source"
UNBOUNDED = 1e12  # stands for the demand on something that is not there


@dataclass(frozen=True, slots=True)
class Context:
    design: Design
    sizes: Sizes
    stack: Stack
    parts: tuple[Part, ...]
    past: History
    members: Members
    sites: Mapping[tuple[str, str], SiteHistory]
    findings: Findings

    def plate(self, key: str) -> Plate:
        """The plate of a part, in the hand behind the chain."""
        body = next(p.body for p in self.parts if p.key == key)
        if not isinstance(body, Plate):
            raise TypeError(f"{key} is not a plate")
        return body

    @property
    def running(self) -> Running:
        """Shaft, bearings and sheave pin, which the proportions settle."""
        if self.sizes.running is None:
            raise ValueError("sizes without a shaft")
        return self.sizes.running

    def site(self, part: str, site: str) -> SiteHistory:
        return self.sites[part, site]

    def worst_check(
        self,
        part: str,
        site: str,
        check: str,
        demand: Floats,
        capacity: Floats | float,
        unit: str,
        target: float,
        method: str,
        source: str,
        note: str = "",
    ) -> Check:
        """The check at the crank angle where capacity over demand is least; both over crank angle (n)."""
        # a part that has no material somewhere has no capacity there, and a load on nothing is without bound
        capacities = np.fmax(np.asarray(capacity, dtype=float), 0.0)  # of NaN and 0 the 0
        demand = np.where(np.isfinite(demand), demand, UNBOUNDED)
        i = int(np.maximum(demand / np.maximum(capacities, 1e-100), 0.0).argmax())
        loaded = bool(demand[i] > 0.0)
        there = float(capacities.flat[i if capacities.size > 1 else 0])
        return Check(
            part=part, site=site, check=check, case=self.past.case_at(i) if loaded else "",
            crank_angle=float(self.past.state.crank_angle[i]) if loaded else None,
            demand=float(demand[i]), capacity=there, unit=unit, target=target,
            method=method, source=source, note=note,
        )  # fmt: skip

    def shape_check(
        self,
        part: str,
        site: str,
        check: str,
        wanted: float,
        found: float,
        unit: str,
        method: str,
        source: str,
        note: str = "",
    ) -> Check:
        """A check of sizes, not of loads: what is there against what is wanted, target 1."""
        return Check(part, site, check, "", None, wanted, max(found, 0.0), unit, 1.0, method, source, note)


def length_of(vector: Floats) -> Floats:
    """Length (n) of vectors (3, n)."""
    return np.asarray(np.linalg.norm(vector, axis=0))


STEELS = frozenset({"structural steel", "quenched and tempered plate", "through-hardening bar", "case-hardening bar"})


def rule_note(material: Material) -> str:
    """What is to be said where a rule of a structural-steel standard meets another metal."""
    return "" if material.kind in STEELS else f"a rule for structural steel, applied to {material.name}"
