"""Values that are worked out once for each object."""

from __future__ import annotations

import pickle
import threading

from core.once import Once


class Square:
    def __init__(self, side: float) -> None:
        self.side = side
        self.asked = 0
        self.gate: threading.Event | None = None

    @Once
    def area(self) -> float:
        """Side times side."""
        self.asked += 1
        if self.gate is not None:
            self.gate.wait(10)
        return self.side**2


def test_a_value_is_worked_out_once_and_stays_with_its_object():
    one, other = Square(3.0), Square(4.0)
    assert (one.area, one.area, other.area) == (9.0, 9.0, 16.0)
    assert (one.asked, other.asked) == (1, 1)
    assert Square.area.__doc__ == "Side times side."
    assert pickle.loads(pickle.dumps(one)).__dict__["area"] == 9.0


def test_a_long_evaluation_in_one_thread_holds_up_no_other_object():
    slow, quick = Square(3.0), Square(4.0)
    slow.gate = threading.Event()
    thread = threading.Thread(target=lambda: slow.area)
    thread.start()
    try:
        done: list[float] = []
        asking = threading.Thread(target=lambda: done.append(quick.area))
        asking.start()
        asking.join(5)
        assert done == [16.0]
    finally:
        slow.gate.set()
        thread.join()
    assert slow.area == 9.0
