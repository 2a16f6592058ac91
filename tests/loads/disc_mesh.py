"""A disc with all its holes in plane stress for the tests: meshed by rings round each hole, held at its hub bolts."""

from __future__ import annotations

from typing import Any

import numpy as np
from scipy.sparse.linalg import splu
from scipy.spatial import Delaunay, cKDTree
from skfem import Basis, MeshQuad, MeshTri

from parts.design import Floats
from parts.outline import Plate as Outline
from tests.loads.hole_influence import series
from tests.loads.plane_stress import Plate, stress_of

ROUGH, FINE = 16, 44  # points round a hole, and round the one that is looked at


def disc_mesh(rim: float, holes: Floats, size: float, fine: int) -> Any:
    """Quadrilaterals about ``size`` mm wide, smaller towards the holes (m, 3): x, y, diameter; ``fine``: a hole's index."""
    kept = [_circle(0.0, 0.0, rim, int(np.pi * rim / size), 0.0)]
    rings: list[tuple[float, Floats]] = []
    for i, (x, y, d) in enumerate(holes):
        n = FINE if i == fine else ROUGH
        kept.append(_circle(x, y, d, n, 0.0))
        wide, turned = d, 0
        while (step := np.pi * wide / n) < size:
            wide, turned = wide + 1.8 * step, turned + 1
            rings.append((step, _circle(x, y, wide, n, turned * np.pi / n)))
    grid = np.meshgrid(np.arange(-rim / 2.0, rim / 2.0, size), np.arange(-rim / 2.0, rim / 2.0, 0.866 * size))
    grid[0][1::2] += size / 2.0
    rings.append((size, np.stack([g.ravel() for g in grid])))
    points = np.concatenate(kept, axis=1)
    for step, found in sorted(rings, key=lambda ring: ring[0]):
        new = found[:, _inside(found, rim, holes, 0.45 * step)]
        if new.size:
            far, _ = cKDTree(points.T).query(new.T)
            points = np.concatenate([points, new[:, far > 0.75 * step]], axis=1)
    cells = Delaunay(points.T).simplices.T
    cells = cells[:, _inside(points[:, cells].mean(axis=1), rim, holes, 0.0)]
    return _rounded(_quads(MeshTri(np.ascontiguousarray(points), np.ascontiguousarray(cells))), rim, holes)


def _circle(x: float, y: float, d: float, n: int, start: float) -> Floats:
    a = start + np.linspace(0.0, 2.0 * np.pi, n, endpoint=False)
    return np.stack([x + d / 2.0 * np.cos(a), y + d / 2.0 * np.sin(a)])


def _inside(points: Floats, rim: float, holes: Floats, margin: float) -> Any:
    from_holes = [np.hypot(points[0] - x, points[1] - y) - d / 2.0 for x, y, d in holes]
    return np.min([rim / 2.0 - np.hypot(*points), *from_holes], axis=0) > margin


def _quads(mesh: Any) -> Any:
    """Each triangle cut into three."""
    n, edges = mesh.p.shape[1], mesh.facets.shape[1]
    points = np.concatenate([mesh.p, mesh.p[:, mesh.facets].mean(axis=1), mesh.p[:, mesh.t].mean(axis=1)], axis=1)
    a, b, c = mesh.t
    ab, bc, ac = (n + mesh.t2f[i] for i in range(3))
    middle = n + edges + np.arange(mesh.t.shape[1])
    corners = [(a, ab, middle, ac), (b, bc, middle, ab), (c, ac, middle, bc)]
    cells = np.concatenate([np.stack(corner) for corner in corners], axis=1)
    one, other = points[:, cells[1]] - points[:, cells[0]], points[:, cells[3]] - points[:, cells[0]]
    wrong = one[0] * other[1] - one[1] * other[0] < 0.0
    cells[:, wrong] = cells[::-1][:, wrong]
    return MeshQuad(np.ascontiguousarray(points), np.ascontiguousarray(cells))


def _rounded(mesh: Any, rim: float, holes: Floats) -> Any:
    """With the nodes between the points of a circle moved onto it: a corner there would be a notch of its own."""
    points, outside = mesh.p.copy(), mesh.boundary_nodes()
    for x, y, d in [*holes, (0.0, 0.0, rim)]:
        at = points[:, outside] - np.array([[x], [y]])
        r = np.hypot(*at)
        near = np.abs(r - d / 2.0) < 0.012 * d
        points[:, outside[near]] = np.array([[x], [y]]) + at[:, near] * (d / 2.0 / r[near])
    return MeshQuad(points, mesh.t)


class Disc:
    """The disc of a machine, 1 mm thick, its crank pin's hole on the x axis, its hub bolts' holes held all round."""

    def __init__(self, outline: Outline, rim: float) -> None:
        self.rim = rim
        self.holes = np.array([(*hole.center, hole.diameter) for hole in outline.holes])
        i = next(i for i, hole in enumerate(outline.holes) if hole.name == "crank_pin_hole")
        self.at, _, self.d = (float(value) for value in self.holes[i])
        self.plate = Plate(disc_mesh(rim, self.holes, rim / 18.0, i))
        bolts = [row for row, hole in zip(self.holes, outline.holes, strict=True) if hole.name.startswith("hub_bolt")]
        mesh, basis = self.plate.mesh, self.plate.basis

        def on_bolts(p: Floats) -> Any:
            return np.min([np.abs(np.hypot(p[0] - x, p[1] - y) - d / 2.0) / d for x, y, d in bolts], axis=0) < 0.02

        held = basis.get_dofs(mesh.facets_satisfying(on_bolts, boundaries_only=True)).flatten()
        self.free = np.setdiff1d(np.arange(basis.N), held)
        self.solve = splu(self.plate.stiffness[self.free][:, self.free].tocsc()).solve
        self.edge: Any = self.plate.edge_of_hole(self.at, self.d)
        self.angle = np.arctan2(-self.edge.normals[1], -self.edge.normals[0]).ravel()

    def moved(self, x: float, y: float) -> Floats:
        """Displacements under a force (N) of the pin."""
        u = np.zeros(self.plate.basis.N)
        u[self.free] = self.solve(self.plate.pin(self.at, self.d, (x, y))[self.free])
        return u

    def hoop(self, u: Floats, points: Floats) -> Floats:
        """Stress along the pin hole's edge at points (rad), by a trigonometric series as the table of influences has it."""
        found = np.asarray(self.plate.hoop(u, self.edge)).ravel()
        weights, *_ = np.linalg.lstsq(series(self.angle), found, rcond=None)
        return np.asarray(series(points) @ weights)

    def on_chord(self, u: Floats, x: float, apart: float) -> tuple[Floats, Floats]:
        """y and stress across the chord at x, between the holes and ``apart`` of a diameter from their edges."""
        half = float(np.sqrt((self.rim / 2.0) ** 2 - x**2))
        y = np.linspace(-0.999 * half, 0.999 * half, 401)
        clear = np.min([np.hypot(x - hx, y - hy) - (0.5 + apart) * d for hx, hy, d in self.holes], axis=0) > 0.0
        y = y[clear]
        at = np.stack([np.full_like(y, x + 1e-6), y])
        mesh = self.plate.mesh
        cells = mesh.element_finder()(*at)
        local = mesh.mapping().invF(at[:, :, None], tind=cells)
        there = Basis(mesh, self.plate.element, elements=cells, quadrature=(local, np.ones(1)))
        return y, stress_of(there.interpolate(u).grad)[0, 0][:, 0]
