"""What stands between the command and the person: console, progress, interruption, and failures told in one line."""

from __future__ import annotations

import os
import signal
import sys
import traceback
from collections.abc import Callable
from types import FrameType

import typer
from rich.console import Console
from rich.progress import BarColumn, Progress, TextColumn

from exporters.entry import INTERRUPTED, STOPPED
from exporters.failure import ToolFailure
from parts.problems import DesignRefused

HOLDS, FALLS_SHORT, REFUSED, FAILED = 0, 1, 2, 3

Report = Callable[[str, int, int], None]


def message(text: str) -> None:
    """A line for the person, on standard error."""
    typer.echo(text, err=True)


def width_of_messages() -> int:
    """Columns of the window that messages go to, or 100 where they do not go to one."""
    try:
        return max(40, os.get_terminal_size(sys.stderr.fileno()).columns)
    except (OSError, ValueError, AttributeError):  # not a window, closed, or no file at all
        return 100


def console() -> Console:
    """A console of at most 80 columns, whatever the window; plain text when the output is not a terminal."""
    out = Console()
    return Console(width=min(80, out.width) if out.is_terminal else 80, highlight=False)


class Interruptible:
    """Long work that stops between two steps when it is asked to, by Ctrl-C or by the system.

    The solid modeller swallows an interruption that reaches it, or takes it for a fault of its own, so the request is only
    noted and raised as ``KeyboardInterrupt`` at the next step. A second one ends the process at once.
    """

    def __enter__(self) -> Interruptible:
        self.asked = False
        self.before = {s: signal.signal(s, self._note) for s in (signal.SIGINT, signal.SIGTERM)}
        return self

    def _note(self, number: int, frame: FrameType | None) -> None:
        self.asked = True
        signal.signal(number, signal.SIG_DFL)

    def check(self) -> None:
        if self.asked:
            raise KeyboardInterrupt

    def __exit__(self, *_: object) -> None:
        for number, handler in self.before.items():
            signal.signal(number, handler)


class Shown:
    """Progress of long work on standard error, nothing where that is not a terminal; stops where it is asked to."""

    def __enter__(self) -> Report:
        self.bar: Progress | None = None
        self.work = Interruptible().__enter__()
        if sys.stderr.isatty():
            columns = (
                TextColumn("{task.description:<40}"),
                BarColumn(bar_width=24),
                TextColumn("{task.completed}/{task.total}"),
            )
            self.bar = Progress(*columns, console=Console(stderr=True, width=80), transient=True)
            self.bar.start()
            self.task = self.bar.add_task("", total=None)
        return self._step

    def _step(self, what: str, done: int, of: int) -> None:
        self.work.check()
        if self.bar is not None:
            self.bar.update(self.task, description=what, completed=done, total=of)

    def __exit__(self, *_: object) -> None:
        if self.bar is not None:
            self.bar.stop()
        self.work.__exit__()


class ShownLate:
    """The same, from the first step on: work that never reports one can be interrupted as anything else."""

    def __enter__(self) -> Report:
        self.inner: Shown | None = None
        return self._step

    def _step(self, what: str, done: int, of: int) -> None:
        if self.inner is None:
            self.inner = Shown()
            self.report = self.inner.__enter__()
        self.report(what, done, of)

    def __exit__(self, kind: object, *_: object) -> None:
        if self.inner is not None:
            self.inner.__exit__()
            if kind is None:
                self.inner.work.check()  # asked to stop after the last step


def emit(text: str) -> None:
    """Write a result to standard output; that whoever read it has gone, such as ``head``, is no failure."""
    try:
        sys.stdout.write(text)
        sys.stdout.flush()
    except BrokenPipeError:
        _let_go_of_output()


def finish(holds: bool) -> None:
    """Leave with the verdict as exit status."""
    raise typer.Exit(HOLDS if holds else FALLS_SHORT)


def _let_go_of_output() -> None:
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def guarded(app: typer.Typer) -> None:
    """Run the command; what cannot be done is said in a line each. Only a fault of the tool itself shows a traceback."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")  # a console that lacks a sign shows a mark in its place
    try:
        app()
    except DesignRefused as refused:
        message(refused.wrapped(width_of_messages()))
        count = len(refused.problems)
        message(f"{count} problem{'s' if count != 1 else ''}; nothing was written")
        sys.exit(REFUSED)
    except OSError as failure:
        name = f"{failure.filename}: " if failure.filename else ""
        message(f"drawcrank: {name}{failure.strerror or failure}")
        sys.exit(FAILED)
    except ToolFailure as failure:
        message(f"drawcrank: {failure}")
        sys.exit(FAILED)
    except KeyboardInterrupt:
        message(INTERRUPTED)
        sys.exit(STOPPED)
    except Exception:
        traceback.print_exc()
        message("drawcrank: this is a fault of the tool, not of the design; nothing was written over")
        sys.exit(FAILED)
