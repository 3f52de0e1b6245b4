"""The unbalance vectors as arrows of the view."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from app.window.view.scene import Line
from core.drive.vectors import UnbalanceVector, arrow_of, vectors_of
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.drive import BalanceAnswer

# Of the diagonal of the box around everything: how long the longest arrow is.
LONGEST = 0.35


def arrows_of(session: Session, answer: BalanceAnswer | None) -> tuple[Line, ...]:
    """Return an arrow for each unbalance that is not 0, from the axis to the heavy side; LONGEST is for the largest."""
    bounds = session.assembly.bounds
    if answer is None or bounds is None:
        return ()
    vectors = [vector for vector in vectors_of(answer, session.drive.balance) if vector.amount]
    largest = max((vector.amount for vector in vectors), default=1.0)
    scale = LONGEST * float(np.linalg.norm(np.ptp(bounds, axis=0))) / largest
    return tuple(Line(_name(session, vector), *arrow_of(vector, answer.axis, scale)) for vector in vectors)


def _name(session: Session, vector: UnbalanceVector) -> str:
    amount = session.units.text(vector.amount, Kind.UNBALANCE, 3, decimal_mark=session.decimal_mark)
    return f"{vector.name} {amount}"
