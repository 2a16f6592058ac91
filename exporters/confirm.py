"""Each part's solid confirmed twice: by a triangle mesh of it, and by the volume that the outline or profile gives.

The solid modeller and the mesh library are imported inside the functions only.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import dist
from typing import TYPE_CHECKING

from parts.outline import Part
from parts.shape import mass_properties

if TYPE_CHECKING:
    from cadquery import Shape

# The mesh stays within MESH_TOLERANCE mm of the surface and MESH_ANGLE rad of its direction; chords of that angle lose
# up to angle²/6 of a round's volume, half of it as the mesher spaces them.
MESH_TOLERANCE = 0.02
MESH_ANGLE = 0.2
MESH_VOLUME_LIMIT = 3e-3  # relative
MESH_CENTER_LIMIT = 1e-3  # of the part's largest extent
RECORD_VOLUME_LIMIT = 1e-6  # relative
RECORD_CENTER_LIMIT = 1e-6  # of the part's largest extent


@dataclass(frozen=True, slots=True)
class Confirmation:
    """How far the mesh and the part's own records are from the solid modeller; volumes in mm³, centre in mm."""

    part: str
    volume: float  # the modeller's
    center: tuple[float, float, float]
    mesh_volume_difference: float  # relative
    mesh_center_difference: float  # of the largest extent
    record_volume_difference: float
    record_center_difference: float
    watertight: bool
    valid: bool
    solids: int
    failing: tuple[str, ...]

    @property
    def holds(self) -> bool:
        return not self.failing


def confirm(part: Part, shape: Shape) -> Confirmation:
    """Compare a part's solid with a mesh of it and with the volume and centre that its records give."""
    import numpy as np
    import trimesh
    from OCP.BRepMesh import BRepMesh_IncrementalMesh

    box = shape.BoundingBox()
    extent = max(box.xlen, box.ylen, box.zlen)
    volume, center = float(shape.Volume()), shape.Center().toTuple()
    BRepMesh_IncrementalMesh(shape.wrapped, MESH_TOLERANCE, False, MESH_ANGLE)
    points, triangles = shape.tessellate(1.0, 1.0)  # takes the mesh just made, which is finer
    mesh = trimesh.Trimesh(np.array([p.toTuple() for p in points]), np.array(triangles), process=False)
    mesh.merge_vertices()
    records = mass_properties(part)
    solids, valid, watertight = len(shape.Solids()), bool(shape.isValid()), bool(mesh.is_watertight)
    differences = (
        ("volume of the mesh", abs(mesh.volume / volume - 1), MESH_VOLUME_LIMIT),
        ("centre of mass of the mesh", dist(mesh.center_mass, center) / extent, MESH_CENTER_LIMIT),
        ("volume from outline or profile", abs(records.volume / volume - 1), RECORD_VOLUME_LIMIT),
        ("centre of mass from outline or profile", dist(records.center, center) / extent, RECORD_CENTER_LIMIT),
    )
    failing = [
        f"{part.name}: {what} differs from the solid's by {value:.2g}, more than {limit:g}"
        for what, value, limit in differences
        if not value <= limit
    ]
    if not watertight:
        failing.append(f"{part.name}: the mesh of the solid is not watertight")
    if not valid:
        failing.append(f"{part.name}: the solid modeller calls the solid invalid")
    if solids != 1:
        failing.append(f"{part.name}: {solids} solids instead of one")
    return Confirmation(
        part=part.name,
        volume=volume,
        center=center,
        mesh_volume_difference=float(differences[0][1]),
        mesh_center_difference=float(differences[1][1]),
        record_volume_difference=float(differences[2][1]),
        record_center_difference=float(differences[3][1]),
        watertight=watertight,
        valid=valid,
        solids=solids,
        failing=tuple(failing),
    )
