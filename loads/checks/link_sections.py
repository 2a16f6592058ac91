"""The link as a beam from pin to pin: what each section carries over crank angle, and what its net section makes of it.

Axes are the link's: x from the crank pin to the chain pin, y across, z through the thickness. mm, N, N·mm, MPa.
Arrays over sections and crank angles have the shape (k, n).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from parts.design import Floats


@dataclass(frozen=True, slots=True)
class LinkShape:
    """What the sections are cut from. The sink lies about the crank pin's eye, in the face towards the chain."""

    length: float
    reach: float  # crank pin to stop
    width: float
    thickness: float
    crank_hole: float
    chain_hole: float
    sink_diameter: float = 0.0
    sink_depth: float = 0.0


@dataclass(frozen=True, slots=True)
class Sections:
    """Net sections (k): area, second moments about the y-wise and z-wise neutral axes, where their middle lies."""

    x: Floats
    area: Floats
    inertia_z: Floats  # for bending in the plane of the disc
    inertia_y: Floats  # for bending out of it
    shift: Floats  # of the centroid along z, from the link's middle
    far_face: Floats  # from the centroid
    leg: Floats  # width of each part that carries: the whole width, or what is left beside a hole
    legs: Floats  # 1 or 2


@dataclass(frozen=True, slots=True)
class Internal:
    """Internal forces on the chain pin's side of each section, (k, n)."""

    axial: Floats  # tension positive
    shear: Floats
    in_plane: Floats  # about z
    out_of_plane: Floats  # about y
    torsion: Floats


def places(shape: LinkShape, count: int = 13) -> Floats:
    """Sections (k) from pin to pin: evenly, and at each hole's middle and edges, the sink's edge and the stop."""
    a, b, s = shape.crank_hole / 2.0, shape.chain_hole / 2.0, shape.sink_diameter / 2.0
    at = [0.5 * a, 0.87 * a, a, s, shape.reach, shape.length - b, shape.length - 0.87 * b, shape.length - 0.5 * b]
    x = np.concatenate([np.linspace(0.0, shape.length, count), at])
    return np.unique(x[(x >= 0.0) & (x <= shape.length)])


def _chord(diameter: float, off: Floats) -> Floats:
    return 2.0 * np.sqrt(np.maximum(diameter**2 / 4.0 - off**2, 0.0))


def net_sections(shape: LinkShape, x: Floats) -> Sections:
    """Full depth less the chord of a hole and, over its depth, that of the sink. Geometry of rectangles."""
    w, t = shape.width, shape.thickness
    depth = min(shape.sink_depth, t)
    hole = np.minimum(np.maximum(_chord(shape.crank_hole, x), _chord(shape.chain_hole, shape.length - x)), w - 1e-6)
    sink = np.minimum(np.maximum(_chord(shape.sink_diameter, x), hole), w - 1e-6)
    taken = (sink - hole) * depth  # beyond the hole, in the face towards the chain
    area = (w - hole) * t - taken
    lever = (t - depth) / 2.0
    shift = -taken * lever / area
    inertia_z = t * (w**3 - hole**3) / 12.0 - depth * (sink**3 - hole**3) / 12.0
    inertia_y = (
        (w - hole) * (t**3 / 12.0 + t * shift**2) - (sink - hole) * depth**3 / 12.0 - taken * (lever - shift) ** 2
    )
    return Sections(
        x=x, area=area, inertia_z=inertia_z, inertia_y=inertia_y, shift=shift, far_face=t / 2.0 + np.abs(shift),
        leg=np.where(hole > 0.0, (w - hole) / 2.0, w), legs=np.where(hole > 0.0, 2.0, 1.0),
    )  # fmt: skip


def internal(shape: LinkShape, x: Floats, pull: Floats, couple: Floats, stop: Floats) -> Internal:
    """Internal forces at sections x (k) from what acts beyond them: the chain pin's ``pull`` (3, n) with the ``couple``
    (3, n) of the chain's offset, and the ``stop`` (3, n) for sections before it.

    At the stop itself the section just beyond it counts for the shear. Statics.
    """
    before = (x[:, None] < shape.reach).astype(float)
    shear = pull[1][None, :] + before * stop[1][None, :]
    bending = pull[1][None, :] * (shape.length - x[:, None]) + before * stop[1][None, :] * (shape.reach - x[:, None])
    ones = np.ones_like(before)
    return Internal(ones * pull[0] + before * stop[0], shear, bending, ones * couple[1], ones * couple[0])


def section_stresses(shape: LinkShape, s: Sections, f: Internal) -> Floats:
    """Equivalent stress (k, n) at the worst corner: N/A + M/W about both axes, torsion by distortion energy.

    Beside a hole the two legs share the torsion, and N on a section whose middle is shifted bends it. The greatest
    torsional stress counts as if it stood at the corner (on the safe side). Source: beam theory; torsion of a rectangle
    as in ``rectangle_torsion_stress``.
    """
    per_force = (1.0 / s.area + np.abs(s.shift) * s.far_face / s.inertia_y)[:, None]
    normal = np.abs(f.axial) * per_force
    normal = normal + np.abs(f.in_plane) * (shape.width / 2.0 / s.inertia_z)[:, None]
    normal = normal + np.abs(f.out_of_plane) * (s.far_face / s.inertia_y)[:, None]
    thick = s.area / (s.leg * s.legs)
    long, short = np.maximum(s.leg, thick), np.minimum(s.leg, thick)
    per_torsion = (3.0 + 1.8 * short / long) / (long * short**2) / s.legs
    shear = np.abs(f.torsion) * per_torsion[:, None]
    return np.asarray(np.sqrt(normal**2 + 3.0 * shear**2))


def section_shear(s: Sections, f: Internal) -> Floats:
    """Shear stress 1.5 V/A (k, n) of the net section. Source: beam theory, rectangle."""
    return np.abs(f.shear) * (1.5 / s.area)[:, None]
