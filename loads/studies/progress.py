"""How far a long study has come: told to whoever listens, which is nobody unless the command does."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from contextvars import ContextVar

Report = Callable[[str, int, int], None]  # what, steps done, steps in all

_listener: ContextVar[Report | None] = ContextVar("listener", default=None)


@contextmanager
def listening(report: Report) -> Iterator[None]:
    """Within it every step is told to ``report``, which may raise to stop the work."""
    token = _listener.set(report)
    try:
        yield
    finally:
        _listener.reset(token)


def step(what: str, done: int, of: int) -> None:
    report = _listener.get()
    if report is not None:
        report(what, done, of)
