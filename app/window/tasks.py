"""Long work off the window's thread: a worker with core's progress object, polled until it is done."""

from __future__ import annotations

from concurrent.futures import Future, ThreadPoolExecutor
from typing import TYPE_CHECKING, Generic, TypeVar

from PySide6.QtCore import QObject, QTimer

from core.errors import Cancelled, MasswrightError
from core.progress import Progress

if TYPE_CHECKING:
    from collections.abc import Callable

Result = TypeVar("Result")
POLL_MS = 40


class Task(QObject, Generic[Result]):
    """One piece of work in a thread of its own.

    Args:
        work: called with the progress object, in the worker.
        done: called with its result, in the window's thread.
        failed: called with the sentence of a refusal, in the window's thread.
        moved: called with the fraction done, now and then.

    """

    def __init__(
        self, parent: QObject, work: Callable[[Progress], Result], done: Callable[[Result], None],
        failed: Callable[[str], None], moved: Callable[[float], None] | None = None,
    ) -> None:
        super().__init__(parent)
        self.progress = progress = Progress()
        # Whoever waited for the result may be gone before it comes.
        self.destroyed.connect(progress.cancel)
        self._done, self._failed, self._moved = done, failed, moved
        self._pool = ThreadPoolExecutor(1)
        self._future: Future[Result] = self._pool.submit(work, self.progress)
        self._timer = QTimer(self)
        self._timer.timeout.connect(self._poll)
        self._timer.start(POLL_MS)

    def cancel(self) -> None:
        """Stop the work at its next step, and tell nobody."""
        self.progress.cancel()
        self._timer.stop()
        self._pool.shutdown(wait=True, cancel_futures=True)

    def leave(self) -> None:
        """Let the work end by itself, wait for nothing, and tell nobody."""
        self.progress.cancel()
        self._timer.stop()
        self._pool.shutdown(wait=False, cancel_futures=True)

    def _poll(self) -> None:
        if not self._future.done():
            if self._moved is not None:
                self._moved(self.progress.fraction)
            return
        self._timer.stop()
        self._pool.shutdown(wait=False)
        error = self._future.exception()
        if error is None:
            self._done(self._future.result())
        elif isinstance(error, MasswrightError) and not isinstance(error, Cancelled):
            self._failed(str(error))
        elif not isinstance(error, Cancelled):
            self._failed("Something unexpected went wrong while it was read; nothing of it was taken.")
            raise error
