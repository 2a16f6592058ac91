"""STEP files (AP214) of one part or of an assembly, in mm, with names on products, occurrences and faces.

The solid modeller is imported inside the functions only.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from io import BytesIO
from pathlib import Path
from typing import TYPE_CHECKING, Any, NamedTuple

from exporters.step_text import canonical, entities, strings
from parts.outline import Part
from parts.solids import named_faces, solid

if TYPE_CHECKING:
    from cadquery import Face, Location, Shape


class Placed(NamedTuple):
    """One copy of a part in an assembly; ``location`` is a 4 × 4 array (mm) or the modeller's own."""

    part: Part
    shape: Shape
    location: Any
    name: str
    product_name: str = ""  # default: the part's name


@dataclass(frozen=True, slots=True)
class ReadBack:
    """What a STEP file holds, read from its text and, for solids and volume (mm³), through the modeller."""

    solids: int
    volume: float
    valid: bool
    products: tuple[str, ...]
    occurrences: tuple[str, ...]
    faces: tuple[str, ...]  # the names on them, "" for a face without
    millimetres: bool


def write_part(
    part: Part,
    path: Path,
    product_name: str,
    *,
    shape: Shape | None = None,
    faces: Mapping[str, Face] | None = None,
    remarks: Sequence[str] = (),
) -> None:
    """Write one part as one product. ``remarks`` go into the file's description (what falls short, for example)."""
    document, tool = _new_document()
    shape = solid(part) if shape is None else shape
    _add(document, tool, part, shape, product_name, named_faces(part, shape) if faces is None else faces)
    _write(document, path, remarks)


def write_assembly(
    placed: Iterable[Placed | tuple[Part, Shape, Any, str]],
    path: Path,
    name: str,
    *,
    faces: Mapping[str, Mapping[str, Face]] | None = None,
    remarks: Sequence[str] = (),
) -> None:
    """Write an assembly: one product a part (by ``part.name``), one named occurrence a copy.

    ``faces`` gives the named faces by part name where they are known already.
    """
    from OCP.TCollection import TCollection_ExtendedString
    from OCP.TDataStd import TDataStd_Name

    document, tool = _new_document()
    root = tool.NewShape()
    TDataStd_Name.Set_s(root, TCollection_ExtendedString(name, True))
    labels: dict[str, Any] = {}
    for copy in (Placed(*p) for p in placed):
        key = copy.part.name
        if key not in labels:
            known = (faces or {}).get(key) or named_faces(copy.part, copy.shape)
            labels[key] = _add(document, tool, copy.part, copy.shape, copy.product_name or key, known)
        component = tool.AddComponent(root, labels[key], _location(copy.location).wrapped)
        TDataStd_Name.Set_s(component, TCollection_ExtendedString(copy.name, True))
    tool.UpdateAssemblies()
    _write(document, path, remarks)


def read_back(path: Path) -> ReadBack:
    """What a STEP file holds. Raises ``ValueError`` when it cannot be read."""
    from cadquery import importers

    data = entities(path.read_text(encoding="utf-8"))

    def names(kind: str, at: int) -> tuple[str, ...]:
        return tuple(strings(e)[at] for e in data.values() if e.kind.startswith(kind))

    shapes: list[Any] = importers.importStep(str(path)).vals()
    solids = [s for shape in shapes for s in shape.Solids()]
    return ReadBack(
        solids=len(solids),
        volume=sum(s.Volume() for s in solids),
        valid=all(s.isValid() for s in solids),
        products=names("PRODUCT(", 0),
        occurrences=names("NEXT_ASSEMBLY_USAGE_OCCURRENCE(", 1),
        faces=names("ADVANCED_FACE(", 0),
        millimetres=any("SI_UNIT(.MILLI.,.METRE.)" in "".join(e.texts) for e in data.values()),
    )


def _new_document() -> tuple[Any, Any]:
    from OCP.TCollection import TCollection_ExtendedString
    from OCP.TDocStd import TDocStd_Document
    from OCP.XCAFApp import XCAFApp_Application
    from OCP.XCAFDoc import XCAFDoc_DocumentTool

    application = XCAFApp_Application.GetApplication_s()
    document = TDocStd_Document(TCollection_ExtendedString("XmlOcaf"))
    application.InitDocument(document)
    tool = XCAFDoc_DocumentTool.ShapeTool_s(document.Main())
    tool.SetAutoNaming_s(False)
    return document, tool


def _add(document: Any, tool: Any, part: Part, shape: Shape, product_name: str, faces: Mapping[str, Face]) -> Any:
    """Add a part's shape to a document as a product, with its colour and the names of its faces."""
    from OCP.Quantity import Quantity_Color, Quantity_TypeOfColor
    from OCP.TCollection import TCollection_ExtendedString
    from OCP.TDataStd import TDataStd_Name
    from OCP.XCAFDoc import XCAFDoc_ColorType, XCAFDoc_DocumentTool

    label = tool.AddShape(shape.wrapped, False)
    TDataStd_Name.Set_s(label, TCollection_ExtendedString(product_name, True))
    color = Quantity_Color(*part.color, Quantity_TypeOfColor.Quantity_TOC_sRGB)
    surface = XCAFDoc_ColorType.XCAFDoc_ColorSurf
    XCAFDoc_DocumentTool.ColorTool_s(document.Main()).SetColor(label, color, surface)
    for name, face in faces.items():
        TDataStd_Name.Set_s(tool.AddSubShape(label, face.wrapped), TCollection_ExtendedString(name, True))
    return label


def _location(location: Any) -> Location:
    from cadquery import Location
    from OCP.gp import gp_Trsf

    if isinstance(location, Location):
        return location
    transformation = gp_Trsf()
    transformation.SetValues(*(float(v) for row in location[:3] for v in row))
    return Location(transformation)


def _write(document: Any, path: Path, remarks: Sequence[str]) -> None:
    from OCP.Interface import Interface_Static
    from OCP.STEPCAFControl import STEPCAFControl_Writer
    from OCP.STEPControl import STEPControl_StepModelType
    from OCP.XSControl import XSControl_WorkSession

    writer = STEPCAFControl_Writer(XSControl_WorkSession(), False)
    writer.SetColorMode(True)
    writer.SetNameMode(True)
    # These hold for the whole process, so none is left to what was written before.
    for key, text in (("write.step.schema", "AP214IS"), ("xstep.cascade.unit", "MM"), ("write.step.unit", "MM")):
        Interface_Static.SetCVal_s(key, text)
    for key, value in (
        ("write.surfacecurve.mode", 0),
        ("write.precision.mode", 0),
        ("write.stepcaf.subshapes.name", 1),
    ):
        Interface_Static.SetIVal_s(key, value)
    buffer = BytesIO()
    if not writer.Transfer(document, STEPControl_StepModelType.STEPControl_AsIs):
        raise ValueError(f"the solid modeller could not translate {path.name}")
    writer.WriteStream(buffer)
    text = buffer.getvalue().decode("utf-8")
    path.write_text(canonical(text, path.name, remarks), encoding="ascii", newline="\n")
