"""Rope, webbing and tie where they leave: documents, page, pictures, and one whole folder with a tie."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from ezdxf.filemanagement import readfile

from exporters.bill import bill_html
from exporters.check_json import check_document, dump
from exporters.folder import build_folder
from exporters.parts_list import items
from exporters.summary import key_lines
from loads.examine import Examination, examine
from tests.loads.far_end_designs import DESIGNS


def examined(folder: Path, name: str) -> Examination:
    file = folder / "design.toml"
    file.write_text(DESIGNS[name], encoding="utf-8")
    return examine(file)


@pytest.mark.parametrize("name", DESIGNS)
def test_documents_and_page_speak_of_what_there_is(name: str, tmp_path: Path) -> None:
    e = examined(tmp_path, name)
    noun = e.design.far_end.noun
    document = json.loads(dump(check_document(e)))
    assert document["far_end"]["kind"] == noun
    assert document["chain"] is None
    assert bool(document["adjustment"]) is (noun != "tie")
    page = bill_html(e)
    assert f"The {noun}, {e.design.far_end.designation}" in page
    assert f"largest {noun} tension" in page
    assert "largest chain tension" not in page
    assert any(line == f"largest {noun} tension" for line, _ in key_lines(e))
    bought = {row.part for row in items(e) if row.made_or_bought == "bought"}
    wanted = {"Pin of the output", "Output with its guide"} if noun == "tie" else {noun.capitalize(), "Sheave"}
    assert wanted <= bought
    assert "Chain" not in bought


def test_a_folder_with_a_tie(tmp_path: Path) -> None:
    """The tie has a cut file and a solid; it is the length between its eyes that the design gives."""
    e = examined(tmp_path, "rocker")
    folder = tmp_path / "out"
    build_folder(e, folder, lambda *_: None)
    assert (folder / "step" / "DC-1-tie-A.step").is_file()
    drawing = readfile(folder / "dxf" / "DC-1-tie-A.dxf")
    holes = [c for c in drawing.modelspace().query("CIRCLE") if c.dxf.layer == "PILOT"]
    (a, b) = (c.dxf.center for c in holes)
    assert (a - b).magnitude == pytest.approx(260.0, abs=1e-6)
    manifest = json.loads((folder / "manifest.json").read_text())
    assert not manifest.get("left_out")
