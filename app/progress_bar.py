"""A line on standard error that shows how far a task is: only on a terminal, and once it takes long."""

from __future__ import annotations

import sys
from contextlib import contextmanager
from threading import Event, Thread
from typing import TYPE_CHECKING, Final

from app.terminal import in_signs_of

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.progress import Progress

_PATIENCE: Final = 1.0  # s before anything is shown
_PACE: Final = 0.2  # s between two looks
_WIDTH: Final = 30


@contextmanager
def progress_shown(progress: Progress) -> Iterator[None]:
    """Show how far progress is while the body runs; the line is wiped at the end."""
    if not sys.stderr.isatty():
        yield
        return
    ended = Event()
    watcher = Thread(target=_watch, args=(progress, ended), daemon=True)
    watcher.start()
    try:
        yield
    finally:
        ended.set()
        watcher.join()


def bar_text(task: str, fraction: float) -> str:
    """Return the line for a task of which fraction (0 to 1) is done.

    >>> bar_text("arm.stl", 0.5)
    '[###############...............]  50 %  arm.stl'
    """
    full = round(_WIDTH * fraction)
    return f"[{'#' * full}{'.' * (_WIDTH - full)}] {100 * fraction:3.0f} %  {task}"


def _watch(progress: Progress, ended: Event) -> None:
    if ended.wait(_PATIENCE):
        return
    encoding = sys.stderr.encoding or "utf-8"
    while not ended.wait(_PACE):
        sys.stderr.write("\r" + in_signs_of(bar_text(progress.task, progress.fraction), encoding) + "\x1b[K")
        sys.stderr.flush()
    sys.stderr.write("\r\x1b[K")
    sys.stderr.flush()
