"""Run as a script: writes the samples into a folder in a process of its own, and prints a digest of each file.

python write_samples.py FOLDER step|dxf
"""

from __future__ import annotations

import sys
from hashlib import sha256
from importlib.util import module_from_spec, spec_from_file_location
from pathlib import Path
from types import ModuleType

from parts.outline import Plate

NUMBER = "PIR-100"


def samples() -> ModuleType:
    """The samples by their path: in this process the tests are not a package."""
    spec = spec_from_file_location("samples", Path(__file__).parents[1] / "parts" / "samples.py")
    assert spec is not None
    assert spec.loader is not None
    module = module_from_spec(spec)
    sys.modules["samples"] = module
    spec.loader.exec_module(module)
    return module


def write_steps(folder: Path) -> None:
    from cadquery import Location

    from exporters.step import Placed, write_assembly, write_part
    from parts.solids import solid

    shapes = [(part, solid(part)) for part in samples().ALL]
    for part, shape in shapes:
        write_part(part, folder / f"{part.name}.step", f"{NUMBER} {part.name} A", shape=shape)
    placed = [
        Placed(part, shape, Location((200.0 * i, 0.0, 100.0 * k)), f"{part.name}_{k + 1}")
        for i, (part, shape) in enumerate(shapes)
        for k in range(2)
    ]
    write_assembly(placed, folder / "assembly.step", f"{NUMBER} assembly A")


def write_cut_files(folder: Path) -> None:
    from exporters.dxf import write_plate

    for part in samples().ALL:
        if isinstance(part.body, Plate):
            for units in ("metric", "us"):
                path = folder / f"{part.name}_{units}.dxf"
                write_plate(part, path, units=units, number=NUMBER, revision="A", falls_short=["web 2.6 mm"])


if __name__ == "__main__":
    target = Path(sys.argv[1])
    {"step": write_steps, "dxf": write_cut_files}[sys.argv[2]](target)
    for path in sorted(target.iterdir()):
        sys.stdout.write(f"{path.name} {sha256(path.read_bytes()).hexdigest()}\n")
