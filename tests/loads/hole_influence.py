"""Stress along the edge of a pin's hole by finite elements, harmonic by harmonic: what ``loads/data/holes.toml`` holds.

Run as a module it writes that table anew.
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
from skfem import FacetBasis, LinearForm

from loads.fatigue.notches import HARMONICS, STEPS
from parts.design import Floats
from tests.loads.plane_stress import Plate, _eye, _joined, link_mesh

RATIOS = (0.2, 0.3, 0.4, 0.5, 0.6, 0.7)
N, RINGS = 8, 12
HEAD = """\
# Stress along the edge of a hole in which a pin presses, by finite elements in plane stress (Poisson's ratio 0.3), worked
# out by this project (tests/loads/hole_influence.py, whose test does it again). No published source; at an outward pull the
# eye's are held against the published curve.
#
# Each row: stress times d t over force at 0°, 15°, … 180° from the direction to the rest of the part, for one harmonic of
# the pin's pressure and d over the width. An even harmonic is the same on the other half of the edge, an odd one negative.
#
# eye    a link's end: round about the hole, `width` across
# edge   a plate that is wide to all sides but one, whose straight edge is half a `width` from the hole's middle

"""


def edge_mesh(width: float, d: float) -> Any:
    """A plate with its straight edge at x = −width/2 and a hole d at the origin, six widths to the other sides."""
    half = width / 2.0
    ring = _eye(width, d, N, RINGS, square=True)
    middle = np.linspace(-half, half, 2 * N + 1)
    far = half + 6.0 * width * np.linspace(0.0, 1.0, 15) ** 2
    pieces = [ring, _grid(far, middle), _grid(middle, far), _grid(middle, -far[::-1])]
    return _joined([*pieces, _grid(far, far), _grid(far, -far[::-1])])


def _grid(x: Floats, y: Floats) -> tuple[Floats, Any]:
    points = np.array([a.ravel() for a in np.meshgrid(x, y, indexing="ij")])
    a = (np.arange(x.size - 1)[:, None] * y.size + np.arange(y.size - 1)[None, :]).ravel()
    return points, np.stack([a, a + y.size, a + y.size + 1, a + 1])


def series(angle: Floats) -> Floats:
    n = np.arange(1, 15)[:, None]
    return np.concatenate([np.ones((1, len(angle))), np.cos(n * angle), np.sin(n * angle)]).T


class Hole:
    """A hole of diameter ``d`` in a plate 1 mm thick that is held far away."""

    def __init__(self, kind: str, width: float, d: float) -> None:
        self.d = d
        if kind == "eye":
            self.plate, far = Plate(link_mesh(width, 4.0 * width, d, d, N, RINGS)), 2.0 * width
        else:
            self.plate, far = Plate(edge_mesh(width, d)), 6.0 * width
        self.edge: Any = self.plate.edge_of_hole(0.0, d)
        within = self.plate.mesh.elements_satisfying(lambda at: at[0] > far)
        self.fixed = self.plate.basis.get_dofs(elements=within).flatten()
        self.angle = np.arctan2(-self.edge.normals[1], -self.edge.normals[0])

    def stress(self, load: Floats, points: Floats) -> Floats:
        """Hoop stress at points of the edge (rad), by a trigonometric series through the elements' own points."""
        found = self.plate.hoop(self.plate.solved(load, self.fixed), self.edge).ravel()
        weights, *_ = np.linalg.lstsq(series(self.angle.ravel()), found, rcond=None)
        return np.asarray(series(points) @ weights)

    def pressed(self, order: int, odd: bool, size: float) -> Floats:
        """Load of the pressure ``size`` cos(order θ), or sin."""
        angle = self.angle

        @LinearForm
        def press(v: Any, w: Any) -> Any:
            p = size * (np.sin(order * angle) if odd else np.cos(order * angle))
            return -p * (w.n[0] * v[0] + w.n[1] * v[1])

        edge: FacetBasis = self.edge
        return np.asarray(press.assemble(edge))


def influence(kind: str, ratio: float) -> dict[str, Floats]:
    """The rows of one kind of hole and one d over width."""
    hole = Hole(kind, 10.0 / ratio, 10.0)
    rows = {}
    for name, (order, odd, share) in HARMONICS.items():
        load = hole.pressed(order, odd, share * 2.0 / np.pi / hole.d)
        there, opposite = hole.stress(load, STEPS), hole.stress(load, -STEPS)
        rows[name] = (there - opposite if odd else there + opposite) / 2.0 * hole.d
    return rows


def table() -> str:
    text = HEAD
    for kind in ("eye", "edge"):
        for ratio in RATIOS:
            text += f"[[{kind}]]\nratio = {ratio}\n"
            for name, row in influence(kind, ratio).items():
                text += f"{name} = [{', '.join(f'{v + 0.0:.3f}' for v in row)}]\n"
            text += "\n"
    return text.rstrip("\n") + "\n"


if __name__ == "__main__":
    (Path(__file__).parents[2] / "loads" / "data" / "holes.toml").write_text(table(), encoding="utf-8")
