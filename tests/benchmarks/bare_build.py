"""The bare modeller and DXF calls of a build: the same parts made and written with nothing around them.

Run as a process of its own: ``python bare_build.py DESIGN FOLDER``. It solves the design (as build does), then makes each
solid, writes a STEP a part and one of the assembly and a DXF a plate with the libraries' own one-line calls.
"""

from __future__ import annotations

import sys
from pathlib import Path

from loads.examine import examine
from parts.outline import Plate
from parts.shape import polygon
from parts.solids import named_faces, solid


def main() -> None:
    design, folder = Path(sys.argv[1]), Path(sys.argv[2])
    e = examine(design)
    import cadquery
    import numpy as np
    import trimesh
    from ezdxf.filemanagement import new, readfile

    folder.mkdir(parents=True)
    whole = cadquery.Assembly(name="assembly")
    for part in e.parts:
        shape = solid(part)
        named_faces(part, shape)
        cadquery.exporters.export(cadquery.Workplane(shape), str(folder / f"{part.name}.step"))
        for _ in part.placements:
            whole.add(shape, color=cadquery.Color(*part.color))
        points, triangles = shape.tessellate(0.02, 0.2)
        trimesh.Trimesh(np.array([p.toTuple() for p in points]), np.array(triangles))
        if isinstance(part.body, Plate):
            document = new("R2000")
            space = document.modelspace()
            space.add_lwpolyline(polygon(part.body, 0.05), close=True)
            for hole in part.body.holes:
                space.add_circle(hole.center, hole.diameter / 2)
            document.saveas(folder / f"{part.name}.dxf")
            readfile(folder / f"{part.name}.dxf").audit()
    whole.export(str(folder / "assembly.step"))


if __name__ == "__main__":
    main()
