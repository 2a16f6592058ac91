"""The enclosure's study as it leaves: rows, page, summary, and the drawing of the swept shapes read back."""

from __future__ import annotations

import io
import json
from pathlib import Path
from typing import Any

import ezdxf
import pytest
import shapely
from rich.console import Console

from exporters.bill import bill_html
from exporters.check_json import check_document, dump
from exporters.studies.registry import study_files
from exporters.summary import print_summary
from exporters.sweeps_dxf import LAYERS
from loads.enclosure import EnclosureStudy
from loads.examine import Examination
from loads.motions import BACKING_OFF, RELEASE, WINDING
from tests.exporters.examined import starter

TABLE = """[enclosure]
outline = [[-150, -140], [620, -140], [620, 190], [-150, 190]]
obstacles = [[[-40, 140], [40, 140], [40, 160], [-40, 160]]]

[targets]
"""
FLOOR = '[enclosure]\nbelow = "60 mm"\nbehind = "200 mm"\n\n[targets]\n'


def boxed(*more: tuple[str, str]) -> Examination:
    return starter("impact-rig", ("[targets]\n", TABLE), ('slack = "0 mm"', 'slack = "8 mm"'), *more)


def study(e: Examination) -> EnclosureStudy:
    found = e.studies["enclosure"]
    assert isinstance(found, EnclosureStudy)
    return found


def written(e: Examination, folder: Path) -> Path:
    for what, write in study_files(e):
        if what == "swept shapes":
            write(folder)
    (path,) = (folder / "dxf").iterdir()
    return path


def rings(document: Any, layer: str) -> list[Any]:
    found = document.modelspace().query(f'LWPOLYLINE[layer=="{layer}"]')
    assert all(line.closed for line in found)
    return [shapely.Polygon([(x, y) for x, y in line.get_points("xy")]) for line in found]


def filled(polygons: list[Any]) -> Any:
    """Rings within rings are holes."""
    area = shapely.Polygon()
    for ring in sorted(polygons, key=lambda p: -p.area):
        area = shapely.symmetric_difference(area, ring)
    return area


def test_rows_have_the_fixed_names_and_the_nearest_of_a_sweep_first() -> None:
    rows = json.loads(dump(check_document(boxed())))["studies"]["enclosure"]
    assert len(rows) == 6  # three sweeps, an outline and an obstacle
    for row in rows:
        assert list(row)[:6] == ["sweep", "clearance_mm", "part", "crank_angle_deg", "x_mm", "y_mm"]
    assert list(dict.fromkeys(row["sweep"] for row in rows)) == [WINDING, RELEASE, BACKING_OFF]
    for sweep in (WINDING, RELEASE, BACKING_OFF):
        some = [row["clearance_mm"] for row in rows if row["sweep"] == sweep]
        assert some == sorted(some)


def test_the_page_shows_the_outlines() -> None:
    text = bill_html(boxed())
    assert '<h2 id="enclosure">Enclosure</h2>' in text
    assert 'id="enclosure-sweeps-title"' in text
    assert "dxf/GIR-200-sweeps-A.dxf" in text
    assert "hangs in a bow" in text
    assert 'id="enclosure"' not in bill_html(starter("impact-rig"))


def test_the_summary_has_a_line() -> None:
    out = io.StringIO()
    print_summary(boxed(), Console(file=out, width=200))
    assert "Enclosure, clearance: winding" in " ".join(out.getvalue().split())


@pytest.mark.parametrize(("units", "scale", "code"), [("metric", 1.0, 4), ("us", 1.0 / 25.4, 1)])
def test_the_drawing_reads_back_as_the_swept_shapes(tmp_path: Path, units: str, scale: float, code: int) -> None:
    e = boxed() if units == "metric" else boxed(('units = "metric"', 'units = "us"'))
    path = written(e, tmp_path)
    assert path.name == "GIR-200-sweeps-A.dxf"
    document = ezdxf.readfile(path)  # type: ignore[attr-defined]
    assert not document.audit().errors
    assert document.header["$INSUNITS"] == code
    found = study(e)
    for sweep, layer in LAYERS.items():
        area = shapely.transform(filled(rings(document, layer)), lambda at: at / scale)
        assert shapely.symmetric_difference(area, found.outlines[sweep]).area < 1e-3 * area.area
    (wall,) = rings(document, "ENCLOSURE")
    assert shapely.transform(wall, lambda at: at / scale).area == pytest.approx(770.0 * 330.0, rel=1e-9)
    assert len(rings(document, "OBSTACLES")) == 1
    axis = document.modelspace().query('LINE[layer=="DISC_AXIS"]')
    assert len(axis) == 2
    assert all(line.dxf.start.lerp(line.dxf.end).magnitude < 1e-9 for line in axis)


def test_the_drawing_cannot_be_taken_for_a_cut_file(tmp_path: Path) -> None:
    document = ezdxf.readfile(written(boxed(), tmp_path))  # type: ignore[attr-defined]
    layers = {entity.dxf.layer for entity in document.modelspace()}
    assert not layers & {"CUT", "PILOT", "DRILL", "MARK"}
    notes = [entity.dxf.text for entity in document.modelspace().query('TEXT[layer=="NOTE"]')]
    assert notes[0].startswith("NOT A CUT FILE")
    assert any("at most" in text for text in notes)


def test_a_drawing_of_what_does_not_fit_says_so(tmp_path: Path) -> None:
    e = starter("impact-rig", ("[targets]\n", FLOOR))
    document = ezdxf.readfile(written(e, tmp_path))  # type: ignore[attr-defined]
    notes = [entity.dxf.text for entity in document.modelspace().query('TEXT[layer=="NOTE"]')]
    assert any(text.startswith("FALLS SHORT") and "clear of the enclosure" in text for text in notes)
    walls = document.modelspace().query('LINE[layer=="ENCLOSURE"]')
    assert {round(line.dxf.start.y, 6) for line in walls if line.dxf.start.y == line.dxf.end.y} == {-60.0}
    assert {round(line.dxf.start.x, 6) for line in walls if line.dxf.start.x == line.dxf.end.x} == {-200.0}


def test_the_same_bytes_each_time(tmp_path: Path) -> None:
    e = boxed()
    one, other = (written(e, tmp_path / name).read_bytes() for name in ("a", "b"))
    assert one == other


def test_the_outlines_hold_the_covers_and_are_little_larger() -> None:
    found = study(boxed())
    for sweep, covers in found.covers.items():
        whole = found.outlines[sweep]
        for cover in covers:
            held = shapely.buffer(cover.cores, cover.radius, quad_segs=8)
            assert shapely.covers(shapely.buffer(whole, 1e-6), shapely.union_all(held))
