"""Run as a script: prints as JSON what the modeller's own reader finds in a STEP file, for each free shape.

python read_step.py FILE
"""

from __future__ import annotations

import json
import sys
from typing import Any

from OCP.Interface import Interface_Static
from OCP.Quantity import Quantity_Color, Quantity_TypeOfColor
from OCP.STEPCAFControl import STEPCAFControl_Reader
from OCP.TCollection import TCollection_ExtendedString
from OCP.TDataStd import TDataStd_Name
from OCP.TDF import TDF_LabelSequence
from OCP.TDocStd import TDocStd_Document
from OCP.XCAFApp import XCAFApp_Application
from OCP.XCAFDoc import XCAFDoc_ColorType, XCAFDoc_DocumentTool


def name_of(label: Any) -> str:
    name = TDataStd_Name()
    if not label.FindAttribute(TDataStd_Name.GetID_s(), name):
        return ""
    return str(name.Get().ToExtString())


def free_shapes(path: str) -> list[dict[str, Any]]:
    document = TDocStd_Document(TCollection_ExtendedString("XmlOcaf"))
    XCAFApp_Application.GetApplication_s().InitDocument(document)
    reader = STEPCAFControl_Reader()
    Interface_Static.SetIVal_s("read.stepcaf.subshapes.name", 1)
    reader.SetNameMode(True)
    reader.SetColorMode(True)
    reader.ReadFile(path)
    reader.Transfer(document)
    shapes = XCAFDoc_DocumentTool.ShapeTool_s(document.Main())
    colors = XCAFDoc_DocumentTool.ColorTool_s(document.Main())
    labels = TDF_LabelSequence()
    shapes.GetFreeShapes(labels)
    found = []
    for i in range(1, labels.Length() + 1):
        label = labels.Value(i)
        below = TDF_LabelSequence()
        shapes.GetSubShapes_s(label, below)
        color = Quantity_Color()
        colors.GetColor_s(label, XCAFDoc_ColorType.XCAFDoc_ColorSurf, color)
        found.append(
            {
                "name": name_of(label),
                "assembly": shapes.IsAssembly_s(label),
                "faces": [name_of(below.Value(k)) for k in range(1, below.Length() + 1)],
                "color": color.Values(Quantity_TypeOfColor.Quantity_TOC_sRGB),
            }
        )
    return found


if __name__ == "__main__":
    sys.stdout.write(json.dumps(free_shapes(sys.argv[1])))
