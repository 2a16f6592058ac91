"""What the load module hands on: loads at sites and checks with their safety factors. N, N·mm, rad."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from parts.design import Floats

FIRST_HALF = "winding, first half"
SECOND_HALF = "winding, second half"
HOLD = "hold"
RELEASE, SNATCH = "release", "snatch"  # the swing, and from the first slack or the straight link on
AS_WRITTEN = 1e-5
CASES = (FIRST_HALF, SECOND_HALF, HOLD)


@dataclass(frozen=True, slots=True)
class SiteHistory:
    """The load at one site over crank angle: force (3, n) and moment (3, n) ON the part, in ``frame``.

    ``demand`` (n) ranks the crank angles: the site's worst is where it is greatest.
    """

    part: str
    site: str
    frame: str
    force: Floats
    moment: Floats
    demand: Floats


@dataclass(frozen=True, slots=True)
class FarSite:
    """Where a far end carries load: the pull away from the chain pin, the pull back, or what its guide has to hold."""

    part: str
    site: str
    force: Literal["pull", "back", "guide"]


@dataclass(frozen=True, slots=True)
class LoadRow:
    part: str
    site: str
    case: str
    crank_angle: float
    frame: str
    force: tuple[float, float, float]
    moment: tuple[float, float, float]
    index: int = 0  # of the row of the history that it stands for

    @property
    def magnitude(self) -> float:
        return float(np.hypot(np.hypot(self.force[0], self.force[1]), self.force[2]))


@dataclass(frozen=True, slots=True)
class Check:
    """One capacity against one demand; ``unit`` is theirs. ``crank_angle`` is None where it plays no part."""

    part: str
    site: str
    check: str
    case: str
    crank_angle: float | None
    demand: float
    capacity: float
    unit: str
    target: float
    method: str
    source: str
    note: str = ""

    @property
    def safety_factor(self) -> float | None:
        """Nominal capacity over demand; None where there is no demand."""
        return self.capacity / self.demand if self.demand > 0.0 else None

    @property
    def holds(self) -> bool:
        """Whether the factor reaches its target, to the width of a value that was written down with six figures."""
        factor = self.safety_factor
        return factor is None or factor >= self.target * (1.0 - AS_WRITTEN)

    @property
    def margin(self) -> float:
        """Factor over target: below 1 it falls short; infinite without demand."""
        factor = self.safety_factor
        return float("inf") if factor is None else factor / self.target
