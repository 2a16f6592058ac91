"""The folder that build writes: complete, the same bytes every time, and whole whatever happens."""

from __future__ import annotations

import csv
import errno
import io
import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from exporters import folder as folder_module
from exporters.command import main
from exporters.folder import build_folder
from exporters.manifest import NotOurs, digest_of, may_be_replaced
from exporters.step import read_back
from loads.examine import examine
from tests.starters import NAMES, changed, text_of


def quiet(what: str, done: int, of: int) -> None:
    """No progress."""


def written(tmp_path: Path, text: str, name: str = "design.toml") -> Path:
    path = tmp_path / name
    path.write_text(text, encoding="utf-8")
    return path


def contents(folder: Path) -> dict[str, str]:
    return {p.relative_to(folder).as_posix(): digest_of(p) for p in sorted(folder.rglob("*")) if p.is_file()}


def run(monkeypatch: pytest.MonkeyPatch, *words: str) -> int:
    monkeypatch.setattr(sys, "argv", ["drawcrank", *words])
    with pytest.raises(SystemExit) as stop:
        main()
    return int(stop.value.code or 0)


@pytest.mark.parametrize("name", NAMES)
def test_a_newcomer_gets_a_folder_for_each_starter(
    name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    assert run(monkeypatch, "start", name, "--to", "mine.toml") == 0
    assert run(monkeypatch, "build", "mine.toml", "--to", "out") == 0
    said = capsys.readouterr()
    assert said.out.splitlines()[1].startswith("HOLDS")
    out = tmp_path / "out"
    manifest = json.loads((out / "manifest.json").read_text(encoding="utf-8"))
    listed = {row["path"]: row for row in manifest["files"]}
    assert set(listed) == set(contents(out)) - {"manifest.json"}
    for path, row in listed.items():
        assert (out / path).stat().st_size == row["size"]
        assert digest_of(out / path) == row["sha256"]
    e = examine(tmp_path / "mine.toml")
    who = e.design.identity
    steps = {f"step/{who.number}-{p.name}-{who.revision}.step" for p in e.parts}
    assert steps | {f"step/{who.number}-assembly-{who.revision}.step"} == {p for p in listed if p.startswith("step/")}
    swept = f"dxf/{who.number}-sweeps-{who.revision}.dxf"
    assert {p for p in listed if p.startswith("dxf/")} - {swept} <= {p.replace("step", "dxf") for p in steps}
    assert (swept in listed) == (e.design.enclosure is not None)
    assert {
        "check.json",
        "cycle.csv",
        "bill_of_loads.csv",
        "bill_of_loads.json",
        "bill_of_loads.html",
        "parts_list.csv",
    } <= set(listed)
    assert [row["part"] for row in manifest["solids"]] == [p.name for p in e.parts]
    assert all(row["mesh_watertight"] for row in manifest["solids"])
    whole = read_back(out / f"step/{who.number}-assembly-{who.revision}.step")
    assert whole.solids == sum(p.quantity for p in e.parts)
    assert whole.valid
    assert manifest["design"]["digest"] == e.design.digest
    rows = list(csv.DictReader(io.StringIO((out / "parts_list.csv").read_text(encoding="utf-8"))))
    made = [r for r in rows if r["made_or_bought"] == "made"]
    assert sum(int(r["quantity"]) for r in made) == whole.solids


def test_the_same_design_gives_the_same_bytes_in_two_processes(tmp_path: Path) -> None:
    design = written(tmp_path, text_of("impact-rig"))
    code = (
        "import sys; from pathlib import Path; from exporters.folder import build_folder; from loads.examine import examine;"
        "build_folder(examine(Path(sys.argv[1])), Path(sys.argv[2]), lambda *a: None)"
    )
    found = []
    for seed in ("1", "4242"):
        place = tmp_path / f"somewhere{seed}"
        place.mkdir()
        subprocess.run(
            [sys.executable, "-c", code, str(design), "out"],
            check=True, cwd=place, env={**os.environ, "PYTHONHASHSEED": seed},
        )  # fmt: skip
        found.append(contents(place / "out"))
    assert found[0] == found[1]


def test_changing_the_crank_radius_changes_disc_loads_and_bills(tmp_path: Path) -> None:
    one, other = tmp_path / "one", tmp_path / "other"
    build_folder(examine(written(tmp_path, text_of("seed-thrower"))), one, quiet)
    again = written(tmp_path, changed("seed-thrower", mechanism__crank_radius='"31 mm"'))
    build_folder(examine(again), other, quiet)
    before, after = contents(one), contents(other)
    assert set(before) == set(after)
    for name in ("step/SPT-30-crank_disc-A.step", "dxf/SPT-30-crank_disc-A.dxf", "step/SPT-30-assembly-A.step",
                 "check.json", "cycle.csv", "bill_of_loads.csv", "bill_of_loads.json", "bill_of_loads.html"):  # fmt: skip
        assert before[name] != after[name], name
    rows = [json.loads((f / "check.json").read_text(encoding="utf-8"))["loads"] for f in (one, other)]
    assert rows[0] != rows[1]


def test_a_design_that_falls_short_says_so_in_every_file_that_is_read_or_cut(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    design = written(tmp_path, changed("seed-thrower", spring__most_draw='"80 mm"'))
    out = tmp_path / "out"
    assert run(monkeypatch, "build", str(design), "--to", str(out)) == 1
    assert "FALLS SHORT" in capsys.readouterr().out
    for path in out.rglob("*"):
        if path.suffix in {".dxf", ".step", ".html"} or path.name in {"parts_list.csv", "bill_of_loads.csv"}:
            assert "FALLS SHORT" in path.read_text(encoding="utf-8"), path.name
            assert "most draw" in path.read_text(encoding="utf-8") or path.name == "parts_list.csv", path.name


# Nobody's folder is written over


def test_somebody_elses_folder_is_left_as_it_is(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    design = written(tmp_path, text_of("seed-thrower"))
    theirs = tmp_path / "theirs"
    (theirs / "deep").mkdir(parents=True)
    (theirs / "deep" / "letter.txt").write_text("dear", encoding="utf-8")
    before = contents(theirs)
    assert run(monkeypatch, "build", str(design), "--to", str(theirs)) == 3
    assert "was not made by build" in capsys.readouterr().err
    assert contents(theirs) == before
    assert sorted(p.name for p in tmp_path.iterdir()) == ["design.toml", "theirs"]


def test_a_file_in_the_folders_place_is_left(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    design = written(tmp_path, text_of("seed-thrower"))
    taken = tmp_path / "taken"
    taken.write_text("mine", encoding="utf-8")
    assert run(monkeypatch, "build", str(design), "--to", str(taken)) == 3
    assert taken.read_text(encoding="utf-8") == "mine"


def test_what_was_added_or_changed_in_a_built_folder_is_not_lost(tmp_path: Path) -> None:
    design = written(tmp_path, text_of("seed-thrower"))
    out = tmp_path / "out"
    build_folder(examine(design), out, quiet)
    before = contents(out)
    build_folder(examine(design), out, quiet)
    assert contents(out) == before
    note = out / "dxf" / "ask the shop.txt"
    note.write_text("about the sink", encoding="utf-8")
    with pytest.raises(NotOurs, match=r"ask the shop\.txt"):
        build_folder(examine(design), out, quiet)
    note.unlink()
    (out / "parts_list.csv").write_text("mine now", encoding="utf-8")
    with pytest.raises(NotOurs, match="changed since it was built"):
        may_be_replaced(out)
    assert (out / "parts_list.csv").read_text(encoding="utf-8") == "mine now"


def test_an_empty_folder_may_be_used(tmp_path: Path) -> None:
    out = tmp_path / "out"
    out.mkdir()
    build_folder(examine(written(tmp_path, text_of("seed-thrower"))), out, quiet)
    assert (out / "manifest.json").exists()


# Whole or not at all


def test_a_full_disk_leaves_the_old_folder_whole(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """The disk fills at each of the last steps in turn."""
    design = written(tmp_path, text_of("seed-thrower"))
    out = tmp_path / "out"
    build_folder(examine(design), out, quiet)
    before = contents(out)
    written(tmp_path, changed("seed-thrower", mechanism__crank_radius='"31 mm"'))
    for where in ("_put", "write_manifest", "put_in_place"):
        with monkeypatch.context() as patch:

            def full(*_: object) -> None:
                raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC), "check.json")

            patch.setattr(folder_module, where, full)
            assert run(monkeypatch, "build", str(design), "--to", str(out)) == 3
        assert os.strerror(errno.ENOSPC) in capsys.readouterr().err
        assert contents(out) == before
        assert sorted(p.name for p in tmp_path.iterdir()) == ["design.toml", "out"]


@pytest.mark.skipif(os.name != "posix", reason="limits on file size and signals are posix")
def test_a_real_limit_on_what_can_be_written(tmp_path: Path) -> None:
    """The system itself refuses to write more than 8 kB a file, as a full disk would."""
    design = written(tmp_path, text_of("seed-thrower"))
    out = tmp_path / "out"
    build_folder(examine(design), out, quiet)
    before = contents(out)
    code = (
        "import resource, sys; from exporters.command import main; import cadquery;"
        "resource.setrlimit(resource.RLIMIT_FSIZE, (8000, 8000)); main()"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, "build", str(design), "--to", str(out)],
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 3
    assert "Traceback" not in done.stderr
    assert contents(out) == before
    assert sorted(p.name for p in tmp_path.iterdir()) == ["design.toml", "out"]


@pytest.mark.skipif(os.name != "posix", reason="kills with a posix signal")
def test_a_kill_in_the_middle_leaves_the_old_folder_whole(tmp_path: Path) -> None:
    design = written(tmp_path, text_of("seed-thrower"))
    out = tmp_path / "out"
    build_folder(examine(design), out, quiet)
    before = contents(out)
    written(tmp_path, changed("seed-thrower", mechanism__crank_radius='"31 mm"'))
    code = "from exporters.command import main; main()"
    process = subprocess.Popen(
        [sys.executable, "-c", code, "build", str(design), "--to", str(out)], stdout=subprocess.DEVNULL
    )
    until = time.monotonic() + 120
    while not list(tmp_path.glob(".out.building-*/step/*.step")):
        assert process.poll() is None
        assert time.monotonic() < until
        time.sleep(0.005)
    process.send_signal(signal.SIGKILL)
    process.wait()
    assert contents(out) == before
    assert list(tmp_path.glob(".out.building-*"))
    build_folder(examine(design), out, quiet)
    assert contents(out) != before
    assert not list(tmp_path.glob(".*"))


def test_a_kill_between_the_two_moves_is_put_right(tmp_path: Path) -> None:
    """Where the system cannot exchange two folders in one step, the old one stands aside for a moment."""
    design = written(tmp_path, text_of("seed-thrower"))
    out = tmp_path / "out"
    build_folder(examine(design), out, quiet)
    before = contents(out)
    out.rename(tmp_path / ".out.building-999999999-abc-old")
    (tmp_path / ".out.building-999999999-abc-old" / "note.txt").write_text("x", encoding="utf-8")
    e = examine(design)
    with pytest.raises(NotOurs):  # the old one is back first, and then guarded like any other
        build_folder(e, out, quiet)
    (out / "note.txt").unlink()
    assert contents(out) == before


def test_moving_in_without_an_exchange(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    from exporters import swap

    monkeypatch.setattr(swap, "_exchange", lambda one, other: False)
    for text in ("one", "two"):
        with swap.beside(tmp_path / "out") as folder:
            (folder / "a.txt").write_text(text, encoding="utf-8")
            swap.put_in_place(folder, tmp_path / "out")
    assert (tmp_path / "out" / "a.txt").read_text(encoding="utf-8") == "two"
    assert [p.name for p in tmp_path.iterdir()] == ["out"]
