"""The manifest of a built folder: what is in it, from which design, made by what."""

from __future__ import annotations

import hashlib
import json
import sys
from collections.abc import Mapping, Sequence
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from typing import Any

from parts.design import Design

NAME = "manifest.json"
MAKER = "drawcrank"
FORMAT = 1
# whose version can change the bytes of what is written
MAKES = ("drawcrank", "cadquery", "cadquery-ocp", "ezdxf", "jinja2", "numpy", "pint", "pydantic", "shapely", "trimesh")


class NotOurs(OSError):
    """A folder that is not to be written over: it is somebody else's, or something in it is."""


def digest_of(path: Path) -> str:
    return hashlib.sha256(path.read_bytes()).hexdigest()


def write_manifest(
    folder: Path, design: Design, solids: Sequence[Mapping[str, object]] = (), left_out: Sequence[str] = ()
) -> None:
    """Write the manifest of all files that are in ``folder``, with how each solid was confirmed."""
    files = sorted(p for p in folder.rglob("*") if p.is_file() and p.name != NAME)
    document = {
        "format": FORMAT,
        "made_by": MAKER,
        "design": {
            "title": design.identity.title, "number": design.identity.number, "revision": design.identity.revision,
            "digest": design.digest,
        },
        "versions": _versions(),
        "solids": list(solids),
        "left_out": list(left_out),
        "files": [
            {"path": p.relative_to(folder).as_posix(), "size": p.stat().st_size, "sha256": digest_of(p)} for p in files
        ],
    }  # fmt: skip
    text = json.dumps(document, indent=1, ensure_ascii=False) + "\n"
    (folder / NAME).write_text(text, encoding="utf-8", newline="\n")


def _versions() -> dict[str, str]:
    found = {"python": f"{sys.version_info.major}.{sys.version_info.minor}"}
    for name in MAKES:
        try:
            found[name] = version(name)
        except PackageNotFoundError:
            found[name] = "not installed"
    return found


def read_manifest(folder: Path) -> dict[str, Any] | None:
    """The manifest of a folder, or None where there is none of ours."""
    try:
        document = json.loads((folder / NAME).read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return None
    return document if isinstance(document, dict) and document.get("made_by") == MAKER else None


def may_be_replaced(target: Path) -> None:
    """Raise ``NotOurs`` unless ``target`` is not there, is an empty folder, or holds what ``build`` wrote and no more."""
    if not target.exists() and not target.is_symlink():
        return
    if target.is_symlink() or not target.is_dir():
        raise NotOurs(f"{target} is not a folder; name another with --to")
    entries = [p for p in target.rglob("*") if not p.is_dir()]
    if not entries:
        return
    document = read_manifest(target)
    if document is None:
        raise NotOurs(f"{target} was not made by build, so it is left as it is; name another folder with --to")
    if int(document.get("format", 0)) > FORMAT:
        raise NotOurs(
            f"{target} was made by a newer version (manifest format {document['format']}); it is left as it is"
        )
    known = {row["path"]: row["sha256"] for row in document["files"]}
    for path in sorted(entries):
        name = path.relative_to(target).as_posix()
        if name == NAME:
            continue
        if name not in known:
            raise NotOurs(f"{path} was not written by build and would be lost; move it elsewhere, then build again")
        if digest_of(path) != known[name]:
            raise NotOurs(
                f"{path} was changed since it was built and would be lost; move it elsewhere, then build again"
            )
