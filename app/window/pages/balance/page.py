"""The Balance page: what a rotor is judged by, its values, and the polar plot; the verdict stands above them all."""

from __future__ import annotations

from itertools import groupby
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QGuiApplication, QHideEvent, QShowEvent
from PySide6.QtWidgets import (
    QFrame,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QScrollArea,
    QStackedWidget,
    QVBoxLayout,
    QWidget,
)

from app.window.fields import Form
from app.window.numbers import preview
from app.window.pages.balance.arrows import arrows_of
from app.window.pages.balance.correcting import CorrectSection
from app.window.pages.balance.inputs import (
    LABEL_WIDTH,
    BalanceSection,
    BearingsSection,
    PlaneSection,
    PlanesSection,
    RotorSection,
)
from app.window.pages.balance.polar_view import PolarView
from app.window.pages.torque.switch import Switch
from app.window.pages.values import ValuesTable
from app.window.style import GRID, Words, icon
from core.drive.cautions import STANDARDS, balance_cautions
from core.errors import MasswrightError
from core.handover.balance_lines import angle_note, balance_lines, rotor_basis
from core.handover.table import tsv_of_block
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.drive import BalanceAnswer
    from core.handover import Entry

INPUTS, VALUES, PLOT = range(3)
NOTHING = "No part that has a mass turns with this shaft, so there is nothing to balance. Add parts to the ledger."
MARK = 18
VERDICT_DIGITS = 3


class BalancePage(QWidget):
    """Shows one of three views; works nothing out while nobody sees it.

    Signals:
        vectors_changed: the unbalance as arrows (Line) for the view; none while they are not to be seen.
    """

    vectors_changed = Signal(tuple)

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("page")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground, True)
        self.setAccessibleName("Balance page")
        self._session = session
        self._arrows_kept = False
        self.switch = Switch("View", ("Rotor and corrections", "Values", "Polar plot"))
        self.mark, self.verdict = QLabel(), Words()
        self.values = ValuesTable(session, "Values of the balance")
        self.plot = PolarView(session)
        self.told = Words("", "quiet")
        self.copy_all = QPushButton(icon("copy"), "Copy values")
        self._views = QStackedWidget()
        self.sections: tuple[BalanceSection, ...] = ()
        self._lay_out()
        self.switch.chosen.connect(self._views.setCurrentIndex)
        self.copy_all.clicked.connect(self.copy_values)
        for signal in (session.changed, session.shown_differently):
            signal.connect(self._follow)
        session.edited.connect(self._forget_refusals)

    def _lay_out(self) -> None:
        self.copy_all.setToolTip("Copies name, value, unit and basis of every line, tab-separated.")
        head = QHBoxLayout()
        head.setContentsMargins(2 * GRID, GRID, 2 * GRID, 0)
        head.addWidget(self.switch)
        head.addStretch(1)
        head.addWidget(self.copy_all)
        self.verdict.setWordWrap(True)
        judged = QHBoxLayout()
        judged.setContentsMargins(2 * GRID, 0, 2 * GRID, 0)
        judged.addWidget(self.mark)
        judged.addWidget(self.verdict, 1)
        for view in (self._inputs(), self._values(), self.plot):
            self._views.addWidget(view)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID)
        layout.addLayout(head)
        layout.addLayout(judged)
        layout.addWidget(self._views, 1)

    def _values(self) -> QWidget:
        page = QWidget()
        layout = QVBoxLayout(page)
        layout.setContentsMargins(2 * GRID, 0, 2 * GRID, GRID)
        layout.addWidget(self.values, 1)
        self.told.setWordWrap(True)
        layout.addWidget(self.told)
        return page

    def _inputs(self) -> QWidget:
        rotor, head, planes, correct = (Form(LABEL_WIDTH) for _ in range(4))
        each = [Form(LABEL_WIDTH) for _ in range(2)]
        session = self._session
        head.heading("Correction planes")
        self.rotor, self.bearings = RotorSection(session, rotor), BearingsSection(session, rotor)
        self.planes = tuple(PlaneSection(session, form, at) for at, form in enumerate(each))
        self.more, self.correct = PlanesSection(session, planes), CorrectSection(session, correct)
        rotor.heading("Cautions")
        rotor.say(" ".join(balance_cautions()))
        self.sections = (self.rotor, self.bearings, *self.planes, self.more, self.correct)
        page = QWidget()
        page.setObjectName("page")
        columns = QHBoxLayout(page)
        columns.setContentsMargins(2 * GRID, 0, 2 * GRID, GRID)
        columns.setSpacing(3 * GRID)
        for forms in ((rotor,), (head, *each, planes, correct)):
            column = QVBoxLayout()
            column.setSpacing(GRID)
            for form in forms:
                column.addWidget(form)
            column.addStretch(1)
            columns.addLayout(column, 1)
        area = QScrollArea()
        area.setWidgetResizable(True)
        area.setFrameShape(QFrame.Shape.NoFrame)
        area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        area.setWidget(page)
        return area

    def show_view(self, at: int) -> None:
        """Show the inputs, the values or the plot."""
        self.switch.choose(at)

    def keep_arrows(self, keep: bool) -> None:
        """Show the arrows in the view also while the page is not seen, or only with it."""
        self._arrows_kept = keep
        self._show_arrows()

    # What is shown

    @property
    def entries(self) -> tuple[Entry, ...]:
        """Every value as it is now; none where there is no rotor.

        Raises:
            MasswrightError: it cannot be worked out.
        """
        session, answer = self._session, self._session.machine.balance_answer
        if answer is None:
            return ()
        basis = rotor_basis(session.assembly, session.drive)
        return balance_lines(answer, session.drive, session.units, basis)

    def _follow(self) -> None:
        if self.isVisible():
            self.refresh()
        elif self._arrows_kept:
            self._show_arrows()

    def _forget_refusals(self) -> None:
        for section in self.sections:
            section.forget_refusals()

    def refresh(self) -> None:
        """Show everything as it is now, or why there is nothing."""
        for section in self.sections:
            section.show()
        try:
            answer, entries = self._session.machine.balance_answer, self.entries
        except MasswrightError as error:
            self._show_nothing(str(error), "failed")
            return
        self.correct.show_answer(answer)
        if answer is None:
            self._show_nothing(NOTHING, "quiet")
            return
        self.values.show_sections(
            tuple((name, tuple(each)) for name, each in groupby(entries, key=lambda entry: entry.section))
        )
        self.plot.show_answer(answer)
        self._show_verdict(answer)
        self.copy_all.setEnabled(True)
        self.told.setText(f"{angle_note(answer.axis)} {STANDARDS}")
        self._show_arrows()

    def _show_nothing(self, words: str, role: str) -> None:
        self.correct.show_answer(None)
        self.values.show_sections(())
        self.plot.show_answer(None)
        self.mark.hide()
        self.verdict.setText(words)
        self.verdict.set_role(role)
        self.copy_all.setEnabled(False)
        self.told.setText("")
        self.vectors_changed.emit(())

    def _show_verdict(self, answer: BalanceAnswer) -> None:
        judged = answer.keeps is not None
        name = "sound" if answer.keeps else "failed"
        self.mark.setVisible(judged)
        if judged:
            self.mark.setPixmap(icon(name, name).pixmap(MARK, MARK))
        self.verdict.set_role(name if judged else "text")
        self.verdict.setText(" ".join(self._verdict(answer)))

    def _verdict(self, answer: BalanceAnswer) -> list[str]:
        """Return the sentences that say how well the rotor is balanced."""
        wanted, found = self._session.drive.balance, answer.found
        said = [f"Static unbalance about {answer.axis.name} {self._text(found.amount, Kind.UNBALANCE)}."]
        if answer.grade is not None and wanted.speed is not None:
            has = f"G {answer.grade.worst:.3g} at {self._text(wanted.speed, Kind.SPEED)}"
            if answer.keeps is None or wanted.grade is None:
                said.insert(0, f"It has {has}.")
            else:
                verb = "Keeps" if answer.keeps else "Does not keep"
                said.insert(0, f"{verb} to G {wanted.grade:g}: it has {has}.")
        return said

    def _text(self, value: float, kind: Kind) -> str:
        return self._session.units.text(value, kind, VERDICT_DIGITS, decimal_mark=self._session.decimal_mark)

    def _show_arrows(self) -> None:
        try:
            answer = self._session.machine.balance_answer
        except MasswrightError:
            answer = None
        wanted = self._arrows_kept or self.isVisible()
        self.vectors_changed.emit(arrows_of(self._session, answer) if wanted else ())

    # Copying

    def copy_selection(self) -> None:
        """Put the selected values on the clipboard; nothing selected: all of them."""
        if not self.values.copy_selection():
            self.copy_values()

    def copy_values(self) -> None:
        """Put every value on the clipboard, tab-separated: name, value, unit, basis."""
        rows = [(one.label, one.value, one.unit.symbol, one.basis if one.value is not None else one.reason)
                for one in self.entries]
        text = tsv_of_block([("Name", "Value", "Unit", "Where from"), *rows], self._session.decimal_mark)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied the values of the balance: {preview(text)}")

    # Qt's events

    def showEvent(self, event: QShowEvent) -> None:
        """Catch up with what changed meanwhile."""
        super().showEvent(event)
        self.refresh()

    def hideEvent(self, event: QHideEvent) -> None:
        """Take the arrows away, unless they are kept."""
        super().hideEvent(event)
        if not self._arrows_kept:
            self.vectors_changed.emit(())
