"""The folder that ``build`` writes: everything of one design, whole or not at all."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from exporters.bill import bill_csv, bill_html, bill_json
from exporters.check_json import check_document, dump
from exporters.confirm import RECORD_VOLUME_LIMIT, Confirmation, confirm
from exporters.controller import controller_json
from exporters.cycle_csv import cycle_csv
from exporters.failure import ToolFailure
from exporters.manifest import may_be_replaced, write_manifest
from exporters.modeller import need_modeller
from exporters.parts_list import parts_list_csv
from exporters.procedures import procedures_html
from exporters.shown import shortfall
from exporters.studies.leaving import Step
from exporters.studies.registry import study_files
from exporters.swap import beside, put_in_place, recover
from loads.examine import Examination, directions
from loads.linkage import state
from parts.assembly import Pose, matrix, placed, pose
from parts.outline import Part, Plate
from parts.shape import sound

if TYPE_CHECKING:
    from cadquery import Face, Shape

Report = Callable[[str, int, int], None]


class Unconfirmed(ToolFailure):
    """A written solid or cut file that does not agree with the part it was made from."""


def stem(e: Examination, name: str) -> str:
    """File name of a part without its ending: NUMBER-PART-REV."""
    who = e.design.identity
    return f"{who.number}-{name}-{who.revision}"


def build_folder(e: Examination, target: Path, report: Report) -> tuple[str, ...]:
    """Write the folder of a design to ``target``; ``report`` is told what is being done, how far it is, and of how much.

    Raises ``NotOurs`` before anything is written where ``target`` must not be replaced, ``ModellerMissing`` where solids
    cannot be made, ``Unconfirmed`` where a written file does not agree with its part. The old folder stays as it was
    unless the new one is complete. Returns what was left out: files of a design that falls short, of a shape that cannot
    be made; a design that holds has none.
    """
    recover(target)
    may_be_replaced(target)
    need_modeller()
    made = _Made()
    steps = list(_steps(e, made))
    with beside(target) as folder:
        for i, (what, write) in enumerate(steps):
            report(what, i, len(steps))
            made.try_to(what, lambda write=write: write(folder), e.holds)  # type: ignore[misc]
        report("manifest", len(steps), len(steps))
        write_manifest(folder, e.design, made.confirmed, made.left_out)
        put_in_place(folder, target)
    return tuple(made.left_out)


@dataclass
class _Made:
    """What one build has made so far."""

    confirmed: list[dict[str, object]] = field(default_factory=list)
    left_out: list[str] = field(default_factory=list)

    def try_to(self, what: str, write: Callable[[], None], holds: bool) -> None:
        """Write; a part of a design that falls short may be of a shape that nobody can model, and is then left out."""
        try:
            write()
        except OSError:
            raise
        except Exception as error:
            if holds:
                raise
            self.left_out.append(f"{what}: {' '.join(str(error).split())[:200] or type(error).__name__}")


def _steps(e: Examination, made: _Made) -> Iterator[Step]:
    """What is written, one step a file or a part, in the order of writing."""
    from parts.solids import named_faces, solid

    shapes: dict[str, Shape] = {}
    faces: dict[str, dict[str, Face]] = {}
    masses: dict[str, float] = {}

    def write_part(part: Part) -> Callable[[Path], None]:
        def write(folder: Path) -> None:
            from exporters.step import write_part as write_step

            shape = solid(part)
            named = named_faces(part, shape) if is_sound(part) else {}
            found = confirm(part, shape)
            if not found.holds and is_sound(part):
                raise Unconfirmed("; ".join(found.failing))
            shapes[part.name], faces[part.name] = shape, named
            made.confirmed.append(_confirmed(found))
            masses[part.name] = found.volume * part.density * 1e-9
            path = folder / "step" / f"{stem(e, part.name)}.step"
            path.parent.mkdir(exist_ok=True)
            product = f"{e.design.identity.number} {part.name} {e.design.identity.revision}"
            write_step(part, path, product, shape=shape, faces=named, remarks=_remarks(e, part))

        return write

    def write_cut(part: Part) -> Callable[[Path], None]:
        def write(folder: Path) -> None:
            from exporters.dxf import audit, write_plate

            who = e.design.identity
            path = folder / "dxf" / f"{stem(e, part.name)}.dxf"
            path.parent.mkdir(exist_ok=True)
            write_plate(
                part,
                path,
                units=who.units,
                number=who.number,
                revision=who.revision,
                falls_short=falls_short(e, part.key),
            )
            if is_sound(part):
                audit(path, part)

        return write

    def write_assembly(folder: Path) -> None:
        from exporters.step import Placed
        from exporters.step import write_assembly as write_step

        who = e.design.identity
        copies = [
            Placed(p.part, shapes[p.part.name], matrix(p.at), p.name, f"{who.number} {p.part.name} {who.revision}")
            for p in placed(e.parts, hold_pose(e))
            if p.part.name in shapes
        ]
        path = folder / "step" / f"{stem(e, 'assembly')}.step"
        name = f"{who.number} assembly {who.revision}"
        write_step(copies, path, name, faces=faces, remarks=_remarks(e, None))

    def text(name: str, make: Callable[[], str]) -> Step:
        return name, lambda folder: _put(folder / name, make())

    for part in e.parts:
        yield f"solid of {part.name}", write_part(part)
    yield "assembly", write_assembly
    for part in e.parts:
        if isinstance(part.body, Plate):
            yield f"cut file of {part.name}", write_cut(part)
    yield text("check.json", lambda: dump(check_document(e)))
    yield text("cycle.csv", lambda: cycle_csv(e))
    yield text("bill_of_loads.csv", lambda: bill_csv(e))
    yield text("bill_of_loads.json", lambda: bill_json(e))
    yield text("bill_of_loads.html", lambda: bill_html(e))
    yield text("parts_list.csv", lambda: parts_list_csv(e, masses))
    yield text("controller.json", lambda: controller_json(e))
    yield text("procedures.html", lambda: procedures_html(e))
    yield from study_files(e)


def is_sound(part: Part) -> bool:
    """Whether a part can be one piece; if not, a check says so and its files are written as far as they can be."""
    return not isinstance(part.body, Plate) or not sound(part.body)


def _confirmed(found: Confirmation) -> dict[str, object]:
    """How a solid agrees with its mesh and with the outline or profile that it was made from; differences are relative."""
    return {
        "part": found.part,
        "volume_mm3": float(f"{found.volume:.7g}"),
        "mesh_watertight": found.watertight,
        "mesh_volume_difference": float(f"{found.mesh_volume_difference:.1e}"),
        "mesh_center_difference": float(f"{found.mesh_center_difference:.1e}"),
        "outline_volume_within": RECORD_VOLUME_LIMIT,
    }


def _put(path: Path, text: str) -> None:
    path.write_text(text, encoding="utf-8", newline="")


def falls_short(e: Examination, key: str, most: int = 5) -> list[str]:
    """What falls short, for a file of one part: its own checks first, then the design's, not more than ``most``."""
    rows = sorted(e.falls_short, key=lambda row: row.part != key)
    lines = [shortfall(row) for row in rows[:most]]
    return lines if len(rows) <= most else [*lines, f"and {len(rows) - most} more, see the bill of loads"]


def _remarks(e: Examination, part: Part | None) -> list[str]:
    """What a STEP file says of itself: units, frame, and what falls short."""
    return [
        "lengths in mm; " + _frame(part),
        *(f"FALLS SHORT: {line}" for line in falls_short(e, part.key if part else "")),
    ]


def _frame(part: Part | None) -> str:
    if part is None:
        return "machine frame: origin on the disc axis in the middle of the chain's plane, z towards the viewer"
    return f"axes of the {part.frame} frame, z = 0 on the face towards the chain"


def hold_pose(e: Examination) -> Pose:
    """The assembly's pose at the hold."""
    at = e.figures.events
    d = directions(e.machine, state(e.machine, np.array([float(at.hold)]), at.catch))
    return pose(e.design, float(d.disc[0]), float(d.link[0]), float(d.chain[0]))
