"""Placing selected lines by hand: handles to drag in the view, and keys that nudge; each drag is one edit."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QObject, QTimer

from app.window.placing_bar import PlacingBar
from app.window.view.dragging import Amount
from app.window.view.hand import Steps
from app.window.view.handles import Handles, nearest_to_view
from app.window.view.surface import surface_of
from core.assembly.linked_groups import held_by
from core.assembly.placing import frame_of, mass_centre_of, moved, outermost, standing_of, standing_rows
from core.assembly.seats import seated, seated_in
from core.errors import MasswrightError
from core.quantity import UNITS, Kind, compact

if TYPE_CHECKING:
    from app.window.manner import Manner
    from app.window.session import Session
    from app.window.view import ViewPane
    from app.window.view.handles import Grip
    from app.window.view.nudging import Nudge
    from core.arrays import FloatArray
    from core.assembly import Assembly
    from core.history import History
    from core.placement import Placement

LETTERS = "xyz"
_DIGITS = 6
# So many copies of a cut are outlined while it is dragged.
MOST_OUTLINED = 100


@dataclass(frozen=True)
class _Run:
    """Nudges one after the other, which are one edit: how many steps along or about each direction so far.

    Attributes:
        keys, handles: what is nudged, and the handles as they stood before the first one.
        after: the history as the last one left it; None before the first. Any other edit, or an undo, ends the run.
    """

    keys: tuple[str, ...]
    handles: Handles
    turning: bool
    counts: tuple[int, int, int]
    after: History | None = None


class Placing(QObject):
    """Puts handles at what is selected, and makes edits of what is done with them."""

    def __init__(self, session: Session, view: ViewPane, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._view = view
        self.bar = PlacingBar(session, view)
        self._run: _Run | None = None
        # What the handles that are shown stand at.
        self._for: tuple[Assembly, frozenset[str], Manner] | None = None
        view.hand.tell = self._tell
        # The pointer may move more often than lines can be shown: the last amount counts.
        self._due: Amount | None = None
        self._soon = QTimer(self, singleShot=True, interval=0)
        self._soon.timeout.connect(self._carry)
        view.hand.carried.connect(self._carry_soon)
        view.hand.placed.connect(self._place)
        view.hand.dropped.connect(self._put_back)
        view.nudged.connect(self._nudge)
        for signal in (session.changed, session.selection_changed, session.placed_differently):
            signal.connect(self.refresh)

    @property
    def keys(self) -> tuple[str, ...]:
        """The selected lines that no other selected line carries, in the order of their keys."""
        return outermost(self._session.assembly, sorted(self._session.selected))

    def refresh(self) -> None:
        """Show handles where the selected lines stand now; a drag goes on unless something else was edited."""
        session = self._session
        before, self._for = self._for, (session.assembly, session.selected, session.manner)
        if before is not None and before[0] is session.assembly and before[1:] == self._for[1:]:
            return
        handles, manner = self._handles(), session.manner
        self._view.show_handles(handles, Steps(manner.length_step, manner.angle_step), grips=manner.handles)

    def _handles(self) -> Handles | None:
        keys, assembly, manner = self.keys, self._session.assembly, self._session.manner
        # A line of a linked document is only read here.
        if not keys or any(held_by(assembly, key) is not None for key in keys):
            return None
        frame = standing_of(assembly, keys[0])
        centre = mass_centre_of(assembly, keys[0]) if manner.pivot == "centre" else None
        own = manner.along == "own"
        middle = frame.shift if centre is None else centre
        return Handles(frame, middle, frame.turn.T if own else np.eye(3), own)

    def _carry_soon(self, amount: Amount) -> None:
        self._due = amount
        self._soon.start()

    def _carry(self) -> None:
        """Show the lines, and those that are seated on them, as the drag would have them."""
        handles, before, amount = self._handles(), self._session.assembly, self._due
        if handles is None or amount is None:
            return
        try:
            after = seated(moved(before, self.keys, amount.motion(handles)), before)
        except MasswrightError as error:
            self._view.hand.drop()
            self._session.refused.emit(str(error))
            return
        keys = [*self.keys, *(node.key for node in seated_in(after.members) if node.pose != before.node(node.key).pose)]
        standing: dict[str, Placement] = {}
        for key in keys:
            if not after.is_cut(key):
                standing |= standing_rows(after, key)
        self._view.show_carried(standing)
        cuts = [cut_edges(after, key) for key in keys if after.is_cut(key)]
        if cuts:
            self._view.light_up(np.concatenate(cuts))

    def _place(self, amount: Amount) -> None:
        """Make one edit of a drag."""
        keys, handles = self.keys, self._handles()
        self._put_back()
        if handles is not None:
            name = self._edit_name(keys, handles, amount)
            self._session.edit(name, lambda before: moved(before, keys, amount.motion(handles)))

    def _put_back(self) -> None:
        self._soon.stop()
        self._view.show_carried({})
        if any(self._session.assembly.is_cut(key) for key in self.keys):
            self._view.light_up(np.zeros((0, 2, 3)))

    def _nudge(self, nudge: Nudge) -> None:
        """Move or turn by a step; nudges one after the other are one edit."""
        session, handles = self._session, self._handles()
        manner = session.manner
        step = manner.angle_step if nudge.turning else manner.length_step
        if handles is None or not step:
            what = "is selected that could be moved" if handles is None else "moves: the step is 0"
            session.said.emit(f"Nothing {what}")
            return
        axis, sign = nearest_to_view(self._view.camera, handles.directions)[nudge.way]
        run = self._run_for(nudge, axis, handles)
        count = [*run.counts]
        count[axis] += round(sign) * nudge.sign
        x, y, z = count
        amount = Amount(nudge.turning, (x * step, y * step, z * step))
        name = self._edit_name(run.keys, run.handles, amount)
        do = session.attempt if run.after is None else session.amend
        refusal = do(name, lambda before: moved(before, run.keys, amount.motion(run.handles)))
        if refusal:
            session.refused.emit(refusal)
            return
        self._run = replace(run, counts=(x, y, z), after=session.history)

    def _run_for(self, nudge: Nudge, axis: int, handles: Handles) -> _Run:
        """Return the run that a nudge joins: the same lines moved, or turned about the same axis; else a new one."""
        run = self._run
        fresh = _Run(self.keys, handles, nudge.turning, (0, 0, 0))
        if run is None or run.after is not self._session.history or run.keys != fresh.keys:
            return fresh
        others = any(count for each, count in enumerate(run.counts) if each != axis)
        return fresh if run.turning != nudge.turning or (run.turning and others) else run

    def _tell(self, grip: Grip, amount: Amount | None) -> str:
        its = "its " if self._session.manner.along == "own" else ""
        if amount is not None:
            return self._words(amount, grip.moves)
        plane = "plane " if grip.kind == "in" else ""
        return f"{grip.kind} {its}{plane}{''.join(LETTERS[axis] for axis in grip.moves)}"

    def _words(self, amount: Amount, axes: tuple[int, ...]) -> str:
        """Return an amount for reading: "x +12.5 mm", "about its z −30°"."""
        unit = UNITS["°"] if amount.turning else self._session.units[Kind.LENGTH]
        gap = "" if amount.turning else " "
        told = []
        for axis in axes:
            value = compact(unit.from_si(amount.values[axis]), _DIGITS, decimal_mark=self._session.decimal_mark)
            sign = "+" if amount.values[axis] > 0 else ""
            told.append(f"{LETTERS[axis]} {sign}{value}{gap}{unit.symbol}")
        its = "its " if self._session.manner.along == "own" else ""
        return f"{'about ' if amount.turning else ''}{its}{', '.join(told)}"

    def _edit_name(self, keys: tuple[str, ...], handles: Handles, amount: Amount) -> str:
        assembly = self._session.assembly
        what = assembly.name_of_line(keys[0]) if len(keys) == 1 else f"{len(keys)} lines"
        axes = tuple(axis for axis in range(3) if amount.values[axis]) or (0,)
        along = "along " if handles.own and not amount.turning else ""
        return f"{'Turn' if amount.turning else 'Move'} {what} {along}{self._words(amount, axes)}"


def cut_edges(assembly: Assembly, key: str) -> FloatArray:
    """Return the sharp edges (k, 2, 3) m of all copies of a cut, in the document frame; of its part the first copy."""
    cut = assembly.cut(key)
    surface = surface_of(cut.shape.facets())
    edges = surface.sharp.astype(np.float64) + surface.middle
    standing = frame_of(assembly, key) @ cut.standing
    turn, shift = standing.turn[:MOST_OUTLINED], standing.shift[:MOST_OUTLINED]
    return np.asarray(np.einsum("nij,eaj->neai", turn, edges) + shift[:, None, None]).reshape(-1, 2, 3)
