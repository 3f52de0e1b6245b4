"""How far a long task has come, and the way to stop it; a window or a terminal bar only reads it."""

from __future__ import annotations

from threading import Lock

from core.errors import Cancelled


class Progress:
    """A count that a worker moves forward and that anybody may read or cancel, from any thread.

    Args:
        task: what is being done, for the message of a cancelled task.
        total: how many steps there are; 0 while that is not known.

    >>> progress = Progress("reading", total=4)
    >>> progress.advance(3)
    >>> progress.done, progress.fraction
    (3, 0.75)
    """

    def __init__(self, task: str = "the task", total: int = 0) -> None:
        self.task = task
        self._total = total
        self._done = 0
        self._cancelled = False
        self._lock = Lock()

    @property
    def total(self) -> int:
        """How many steps there are; 0 while that is not known."""
        return self._total

    @property
    def done(self) -> int:
        """How many steps are done."""
        return self._done

    @property
    def cancelled(self) -> bool:
        """Whether somebody asked the task to stop."""
        return self._cancelled

    @property
    def fraction(self) -> float:
        """Share done, 0 to 1; 0 while the total is not known."""
        return min(self._done / self._total, 1.0) if self._total > 0 else 0.0

    def begin(self, total: int) -> None:
        """Start counting from nothing towards total steps.

        Raises:
            Cancelled: somebody called cancel().
        """
        with self._lock:
            self._total, self._done = total, 0
        self.advance(0)

    def advance(self, steps: int = 1) -> None:
        """Count steps as done; a worker calls this once per chunk.

        Raises:
            Cancelled: somebody called cancel().
        """
        with self._lock:
            self._done += steps
        if self._cancelled:
            how_far = f"{self._done} of {self._total}"
            raise Cancelled(f"{self.task} was stopped before it was done", read=how_far)

    def cancel(self) -> None:
        """Ask the worker to stop at its next chunk."""
        self._cancelled = True
