"""Plane stress by finite elements for the tests: a link with two eyes, meshed in rings, pins as pressure or as contact."""

from __future__ import annotations

from typing import Any

import numpy as np
from skfem import Basis, BilinearForm, ElementQuad2, ElementVector, FacetBasis, LinearForm, MeshQuad, condense, solve
from skfem.helpers import ddot, sym_grad, trace

from parts.design import Floats

E, NU = 210e3, 0.3
LAMBDA, MU = E * NU / (1.0 - NU**2), E / 2.0 / (1.0 + NU)


@BilinearForm
def stiffness(u: Any, v: Any, w: Any) -> Any:
    eu, ev = sym_grad(u), sym_grad(v)
    return LAMBDA * trace(eu) * trace(ev) + 2.0 * MU * ddot(eu, ev)


def stress_of(gradient: Any) -> Any:
    strain = 0.5 * (gradient + np.swapaxes(gradient, 0, 1))
    stress = 2.0 * MU * strain
    stress[0, 0] += LAMBDA * (strain[0, 0] + strain[1, 1])
    stress[1, 1] += LAMBDA * (strain[0, 0] + strain[1, 1])
    return stress


def _eye(w: float, d: float, n: int, rings: int, square: bool = False) -> tuple[Floats, Any]:
    """A ring mesh about a hole at the origin, out to a round end (x < 0; or ``square``) and a square (x > 0) of width w."""
    half, up = w / 2.0, np.linspace(0.0, 1.0, n + 1)[:-1]
    right = [(half, half * v) for v in np.linspace(-1.0, 1.0, 2 * n + 1)[:-1]]
    top, bottom = [(half * (1.0 - v), half) for v in up], [(half * v, -half) for v in up]
    arc = [(half * np.cos(a), half * np.sin(a)) for a in np.linspace(np.pi / 2, 1.5 * np.pi, 4 * n + 1)[:-1]]
    if square:
        left = [(-half, -half * v) for v in np.linspace(-1.0, 1.0, 2 * n + 1)[:-1]]
        arc = [(-half * v, half) for v in up] + left + [(-half * (1.0 - v), -half) for v in up]
    out = np.array(right + top + arc + bottom).T
    angle = np.arctan2(out[1], out[0])
    hole = d / 2.0 * np.array([np.cos(angle), np.sin(angle)])
    share = np.concatenate([[0.0], np.cumsum(1.15 ** np.arange(rings))])
    points = np.concatenate([hole * (1.0 - s) + out * s for s in share / share[-1]], axis=1)
    count, i = out.shape[1], np.arange(out.shape[1])
    j = (i + 1) % count
    rows = [np.stack([k * count + i, (k + 1) * count + i, (k + 1) * count + j, k * count + j]) for k in range(rings)]
    return points, np.concatenate(rows, axis=1)


def link_mesh(w: float, length: float, d_1: float, d_2: float, n: int = 7, rings: int = 9) -> Any:
    """A link with round ends: holes d_1 at the origin and d_2 at ``length`` along x."""
    p_1, q_1 = _eye(w, d_1, n, rings)
    p_2, q_2 = _eye(w, d_2, n, rings)
    p_2 = np.array([[length], [0.0]]) + p_2 * np.array([[-1.0], [1.0]])
    sections = np.linspace(w / 2.0, length - w / 2.0, 2 * max(2, int((length - w) / w * n)) + 1)
    return _joined([(p_1, q_1), (p_2, q_2[::-1]), _bar(sections, w, n)])


def strip_mesh(w: float, d: float, n: int = 7, rings: int = 9) -> Any:
    """A strip 5 w long with a hole in its middle, at the origin."""
    far = np.linspace(w / 2.0, 2.5 * w, 4 * n + 1)
    return _joined([_eye(w, d, n, rings, square=True), _bar(far, w, n), _bar(-far[::-1], w, n)])


def _bar(x: Floats, w: float, n: int) -> tuple[Floats, Any]:
    y = np.linspace(-w / 2.0, w / 2.0, 2 * n + 1)
    points = np.array([a.ravel() for a in np.meshgrid(x, y, indexing="ij")])
    a = (np.arange(x.size - 1)[:, None] * y.size + np.arange(y.size - 1)[None, :]).ravel()
    return points, np.stack([a, a + y.size, a + y.size + 1, a + 1])


def _joined(pieces: list[tuple[Floats, Any]]) -> Any:
    """One mesh of pieces whose nodes meet."""
    points = np.concatenate([p for p, _ in pieces], axis=1)
    first = np.cumsum([0] + [p.shape[1] for p, _ in pieces])
    cells = np.concatenate([q + start for (_, q), start in zip(pieces, first, strict=False)], axis=1)
    _, keep, back = np.unique(np.round(points, 6), axis=1, return_index=True, return_inverse=True)
    return MeshQuad(np.ascontiguousarray(points[:, keep]), np.ascontiguousarray(back.ravel()[cells]))


class Plate:
    """A mesh with its stiffness for a plate 1 mm thick."""

    def __init__(self, mesh: Any) -> None:
        self.mesh, self.element = mesh, ElementVector(ElementQuad2())
        self.basis = Basis(mesh, self.element)
        self.stiffness = stiffness.assemble(self.basis)

    def edge_of_hole(self, x: float, d: float) -> Any:
        on = self.mesh.facets_satisfying(
            lambda at: np.abs(np.hypot(at[0] - x, at[1]) - d / 2.0) < 0.02 * d, boundaries_only=True
        )
        return FacetBasis(self.mesh, self.element, facets=on)

    def pin(self, x: float, d: float, force: tuple[float, float]) -> Floats:
        """Load of a pin that presses over half of a hole's edge by the cosine, as much as makes up ``force``."""
        size = float(np.hypot(*force))
        u = np.array(force) / max(size, 1e-300)

        @LinearForm
        def press(v: Any, w: Any) -> Any:
            towards = -(w.n[0] * u[0] + w.n[1] * u[1])
            p = 4.0 * size / (np.pi * d) * np.maximum(towards, 0.0)
            return -p * (w.n[0] * v[0] + w.n[1] * v[1])

        return np.asarray(press.assemble(self.edge_of_hole(x, d)))

    def side(self, x: float, half: float, across: float, force: float) -> Floats:
        """Load across the link over 2 ``half`` mm of its flank at y = ``across``."""
        on = self.mesh.facets_satisfying(
            lambda at: (np.abs(at[1] - across) < 1e-6) & (np.abs(at[0] - x) <= half), boundaries_only=True
        )
        basis = FacetBasis(self.mesh, self.element, facets=on)
        length = float(basis.dx.sum())

        @LinearForm
        def push(v: Any, w: Any) -> Any:
            return force / length * v[1]

        return np.asarray(push.assemble(basis))

    def ends(self, x: float, even: float, bent: float) -> Floats:
        """Load of stresses even + bent·y along x at both ends of a strip, x and −x."""
        on = self.mesh.facets_satisfying(lambda at: np.abs(np.abs(at[0]) - x) < 1e-6, boundaries_only=True)

        @LinearForm
        def pull(v: Any, w: Any) -> Any:
            return w.n[0] * (even + bent * w.x[1]) * v[0]

        return np.asarray(pull.assemble(FacetBasis(self.mesh, self.element, facets=on)))

    def solved(self, load: Floats, fixed: Any) -> Floats:
        return np.asarray(solve(*condense(self.stiffness, load, D=np.asarray(fixed))))

    def nodes(self, x: float, y: float | None = None) -> Any:
        """The nodes on a line across x, or the one at x and y."""
        on = np.abs(self.mesh.p[0] - x) < 1e-6
        return np.flatnonzero(on if y is None else on & (np.abs(self.mesh.p[1] - y) < 1e-6))

    def hoop(self, u: Floats, edge: Any) -> Any:
        """Stress along a hole's edge at its quadrature points."""
        s, n = stress_of(edge.interpolate(u).grad), edge.normals
        return s[0, 0] * n[1] ** 2 - 2.0 * s[0, 1] * n[0] * n[1] + s[1, 1] * n[0] ** 2

    def across(self, u: Floats, x: float, w: float) -> tuple[Floats, Floats, Floats]:
        """y, σ_x and τ_xy at points of the section at x, each (k), from the element on its near side."""
        y = np.linspace(-0.499 * w, 0.499 * w, 41)
        at = np.stack([np.full_like(y, x + 1e-6), y])
        cells = self.mesh.element_finder()(*at)
        local = self.mesh.mapping().invF(at[:, :, None], tind=cells)
        there = Basis(self.mesh, self.element, elements=cells, quadrature=(local, np.ones(1)))
        s = stress_of(there.interpolate(u).grad)
        return y, s[0, 0][:, 0], s[0, 1][:, 0]


def neat_pin_concentration(w: float, d: float, length: float) -> float:
    """K_tn of an eye with a round end pulled by a stiff pin that fills its hole, without friction: by unilateral contact."""
    plate = Plate(link_mesh(w, length, d, d))
    edge = plate.edge_of_hole(0.0, d)
    mesh, basis, middle = plate.mesh, plate.basis, length / 2.0
    facets = mesh.facets_satisfying(lambda at: np.abs(at[0] - middle) < 1e-6)
    beyond = basis.get_dofs(elements=mesh.elements_satisfying(lambda at: at[0] > middle)).flatten()
    slides = np.concatenate([basis.nodal_dofs[1, plate.nodes(middle)], basis.facet_dofs[1, facets]])
    fixed = np.append(np.setdiff1d(beyond, slides), basis.nodal_dofs[1, plate.nodes(middle, 0.0)])
    stiff, moved = 50.0 * E / d, 1e-3
    n_x, n_y = edge.normals

    @BilinearForm
    def spring(u: Any, v: Any, w: Any) -> Any:
        return stiff * w.on * (u[0] * w.n[0] + u[1] * w.n[1]) * (v[0] * w.n[0] + v[1] * w.n[1])

    @LinearForm
    def drag(v: Any, w: Any) -> Any:
        return -stiff * w.on * moved * w.n[0] * (v[0] * w.n[0] + v[1] * w.n[1])

    touches = n_x > 0.0
    for _ in range(12):
        on = touches.astype(float)
        k = plate.stiffness + spring.assemble(edge, on=on)
        u = solve(*condense(k, drag.assemble(edge, on=on), D=fixed))
        at = edge.interpolate(u)
        pressure = stiff * (at[0] * n_x + at[1] * n_y + moved * n_x)
        if bool(np.all((pressure > 0.0) == touches)):
            break
        touches = pressure > 0.0
    pull = float(np.sum(np.where(touches, pressure, 0.0) * n_x * edge.dx))
    return float(np.max(plate.hoop(u, edge))) / (pull / (w - d))
