"""Force and energy of the spring over its draw: linear, constant or a table."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from parts.design import Floats, Spring


@dataclass(frozen=True, slots=True)
class SpringLaw:
    """``preload`` (N) and ``rate`` (N/mm) have the designs' leading axes; a table serves all designs."""

    preload: Floats
    rate: Floats
    draws: Floats | None = None  # (n,) mm, rising from 0
    forces: Floats | None = None  # (n,) N

    def expanded(self) -> SpringLaw:
        """The same law with one more trailing axis, to meet draws of shape (..., n)."""
        return SpringLaw(self.preload[..., None], self.rate[..., None], self.draws, self.forces)

    def chunk(self, rows: slice) -> SpringLaw:
        return SpringLaw(self.preload[rows], self.rate[rows], self.draws, self.forces)

    def copies(self, shape: tuple[int, ...]) -> SpringLaw:
        """One machine's law as that of many alike."""
        full = np.broadcast_to
        return SpringLaw(full(self.preload, shape), full(self.rate, shape), self.draws, self.forces)

    @property
    def last_draw(self) -> float:
        """Largest draw (mm) that the table tells of; infinite without a table."""
        return float("inf") if self.draws is None else float(self.draws[-1])


def law_of(spring: Spring) -> SpringLaw:
    """The law of one design's spring."""
    preload, rate = np.asarray(spring.preload, dtype=float), np.asarray(spring.rate, dtype=float)
    if spring.table is None:
        return SpringLaw(preload, rate)
    return SpringLaw(preload, rate, spring.table[0], spring.table[1])


def spring_force(law: SpringLaw, draw: Floats) -> Floats:
    """Spring force in N at a draw in mm ≥ 0; straight lines between a table's points, its last value beyond it."""
    if law.draws is None or law.forces is None:
        return np.asarray(law.preload + law.rate * draw)
    return np.interp(draw, law.draws, law.forces)


def spring_energy(law: SpringLaw, draw: Floats) -> Floats:
    """Energy in N·mm that the spring takes up from zero draw to ``draw`` (mm): the exact integral of the force."""
    if law.draws is None or law.forces is None:
        return np.asarray(draw * (law.preload + 0.5 * law.rate * draw))
    x, f = law.draws, law.forces
    knots = np.concatenate([[0.0], np.cumsum(np.diff(x) * (f[1:] + f[:-1]) / 2.0)])
    cell = np.clip(np.searchsorted(x, draw, side="right") - 1, 0, len(x) - 1)
    step = draw - x[cell]
    return np.asarray(knots[cell] + step * (f[cell] + np.interp(draw, x, f)) / 2.0)
