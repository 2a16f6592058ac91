"""Loading the solid modeller: a missing library gives one line with the command that installs it."""

import importlib.abc
import sys
from collections.abc import Sequence
from importlib.machinery import ModuleSpec
from types import ModuleType

import pytest

from exporters.modeller import INSTALL_ON_DEBIAN, ModellerMissing, need_modeller


class Breaking(importlib.abc.MetaPathFinder):
    """Stands in the import path and ends every import of the modeller with the given error."""

    def __init__(self, error: Exception) -> None:
        self.error = error

    def find_spec(
        self, fullname: str, path: Sequence[str] | None, target: ModuleType | None = None
    ) -> ModuleSpec | None:
        if fullname == "cadquery":
            raise self.error
        return None


def message_when_import_ends_in(error: Exception, monkeypatch: pytest.MonkeyPatch) -> str:
    monkeypatch.delitem(sys.modules, "cadquery", raising=False)
    monkeypatch.setattr(sys, "meta_path", [Breaking(error), *sys.meta_path])
    with pytest.raises(ModellerMissing) as caught:
        need_modeller()
    message = str(caught.value)
    assert "\n" not in message
    assert "Traceback" not in message
    return message


@pytest.mark.parametrize("kind", [ImportError, OSError])
@pytest.mark.parametrize("library", ["libGL.so.1", "libX11.so.6", "libexpat.so.1", "libstdc++.so.6"])
def test_missing_library_is_named_with_the_command(
    kind: type[Exception], library: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    error = kind(f"{library}: cannot open shared object file: No such file or directory")
    message = message_when_import_ends_in(error, monkeypatch)
    assert library in message
    assert INSTALL_ON_DEBIAN in message


def test_missing_package_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    error = ModuleNotFoundError("No module named 'OCP'", name="OCP")
    message = message_when_import_ends_in(error, monkeypatch)
    assert "OCP" in message
    assert "apt-get" not in message


def test_missing_dll_points_to_the_redistributable(monkeypatch: pytest.MonkeyPatch) -> None:
    error = ImportError("DLL load failed while importing OCP: The specified module could not be found.")
    assert "Visual C++ Redistributable" in message_when_import_ends_in(error, monkeypatch)


def test_other_failures_keep_their_reason_on_one_line(monkeypatch: pytest.MonkeyPatch) -> None:
    error = ImportError("version `GLIBC_2.31' not found\n(required by OCP.so)")
    assert "GLIBC_2.31" in message_when_import_ends_in(error, monkeypatch)


def test_passes_where_the_modeller_is_installed() -> None:
    need_modeller()
    assert "cadquery" in sys.modules
