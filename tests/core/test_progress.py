"""The count that long work moves forward and that a window reads."""

import pytest

from core.errors import Cancelled
from core.progress import Progress


def test_progress_counts_steps_towards_its_total():
    progress = Progress("reading", total=4)
    progress.advance()
    progress.advance(2)
    assert (progress.done, progress.total, progress.fraction, progress.cancelled) == (3, 4, 0.75, False)


def test_progress_without_a_total_has_come_nowhere():
    progress = Progress()
    progress.advance(10)
    assert progress.fraction == 0.0


def test_progress_never_shows_more_than_all():
    progress = Progress(total=2)
    progress.advance(3)
    assert progress.fraction == 1.0


def test_a_second_task_begins_from_nothing():
    progress = Progress(total=2)
    progress.advance(2)
    progress.begin(5)
    assert (progress.done, progress.total) == (0, 5)


def test_a_cancelled_task_stops_at_its_next_step_or_start():
    progress = Progress("weighing dial.stl", total=4)
    progress.advance()
    progress.cancel()
    with pytest.raises(Cancelled) as stopped:
        progress.advance()
    assert str(stopped.value) == "weighing dial.stl was stopped before it was done; read 2 of 4."
    with pytest.raises(Cancelled):
        progress.begin(3)
