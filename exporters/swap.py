"""Folders put in place whole: written beside their place, then moved in, the old one kept until the new one stands."""

from __future__ import annotations

import contextlib
import ctypes
import errno
import os
import shutil
import sys
import tempfile
from collections.abc import Iterator
from pathlib import Path

_AT_FDCWD = -100
_RENAME_EXCHANGE = 2
_RENAME_SWAP = 2
_LEFT_OVER = ".building-"


@contextlib.contextmanager
def beside(target: Path) -> Iterator[Path]:
    """A fresh folder next to ``target`` to write in; whatever happens in it, ``target`` is not touched.

    It is moved into place by ``put_in_place``; if that was not reached it is removed again. What an earlier process that
    is no longer alive left behind is removed first.
    """
    target.parent.mkdir(parents=True, exist_ok=True)
    _sweep_up(target)
    folder = Path(tempfile.mkdtemp(prefix=f".{target.name}{_LEFT_OVER}{os.getpid()}-", dir=target.parent))
    folder.chmod(0o777 & ~_umask())
    try:
        yield folder
    finally:
        if folder.exists():
            shutil.rmtree(folder, ignore_errors=True)


def put_in_place(folder: Path, target: Path) -> None:
    """Move ``folder`` to ``target``. A folder that stands there is exchanged with it in one step where the system can.

    Where it cannot, the old one is set aside, and set back if the new one does not go in.
    """
    _flush(folder)
    if not target.exists():
        os.rename(folder, target)
        return
    if _exchange(folder, target):
        shutil.rmtree(folder)
        return
    aside = folder.with_name(folder.name + "-old")
    os.rename(target, aside)
    try:
        os.rename(folder, target)
    except OSError:
        os.rename(aside, target)
        raise
    shutil.rmtree(aside)


def recover(target: Path) -> None:
    """Set back an old folder that a process killed between two moves left aside."""
    if not target.exists():
        for aside in sorted(target.parent.glob(f".{target.name}{_LEFT_OVER}*-old")):
            os.rename(aside, target)
            return


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask


def _flush(folder: Path) -> None:
    """Have what was written on the disk before the old folder goes; a full disk shows here at the latest."""
    for path in folder.rglob("*"):
        if path.is_file():
            with path.open("rb+") as file:
                os.fsync(file.fileno())


def _exchange(one: Path, other: Path) -> bool:
    """Exchange two folders in one step. False where the system or the file system cannot."""
    name, flag = ("renameat2", _RENAME_EXCHANGE) if sys.platform == "linux" else ("renameatx_np", _RENAME_SWAP)
    try:
        call = getattr(ctypes.CDLL(None, use_errno=True), name)
    except (AttributeError, OSError, TypeError):
        return False
    here = _AT_FDCWD if sys.platform == "linux" else -2
    if call(here, os.fsencode(one), here, os.fsencode(other), flag) == 0:
        return True
    number = ctypes.get_errno()
    if number in (errno.ENOSYS, errno.EINVAL, errno.ENOTSUP, errno.EOPNOTSUPP):
        return False
    raise OSError(number, os.strerror(number), str(other))


def _sweep_up(target: Path) -> None:
    recover(target)
    for left in target.parent.glob(f".{target.name}{_LEFT_OVER}*"):
        number = left.name.partition(_LEFT_OVER)[2].partition("-")[0]
        if number.isdigit() and not _alive(int(number)):
            shutil.rmtree(left, ignore_errors=True)


def _alive(process: int) -> bool:
    if os.name != "posix":
        return True  # asking would end the process there
    try:
        os.kill(process, 0)
    except ProcessLookupError:
        return False
    except PermissionError:
        return True
    return True
