"""The view "Result" of the Torque page: what the drive has to give, as numbers and as curves."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QStackedWidget, QVBoxLayout, QWidget

from app.window.fields import ChoiceField
from app.window.pages.torque.result_graphs import CHOICES, OF_EITHER_SHAFT, OVER_TURN, graph_of
from app.window.pages.torque.result_numbers import ResultNumbers
from app.window.pages.torque.switch import Switch
from app.window.plots.curve_plot import CurvePlot
from app.window.style import GRID, Words, icon
from core.drive import LOAD, MOTOR
from core.errors import MasswrightError
from core.machine import BEING_WORKED_OUT

if TYPE_CHECKING:
    from PySide6.QtGui import QShowEvent

    from app.window.session import Session
    from core.drive import DriveAnswer

NUMBERS, CURVES = range(2)
EMPTY = (
    "Nothing turns yet. Add a shape, a mesh or a known part and say what it weighs; "
    "what the drive has to move and to hold then stands here."
)
WITHOUT_DUTY = (
    "No duty is entered: inertia, gravity and standstill are here already. Add moves and rests under "
    "“Train and duty” for peak and RMS torque, power, energy and the curves over time."
)
SHAFTS: list[tuple[str, object]] = [("at the motor shaft", MOTOR), ("at the load shaft", LOAD)]


class ResultView(QWidget):
    """The torque results; they are worked out only while they are seen."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self.session = session
        self._stale = True
        self.switch = Switch("Result as", ("Numbers", "Curves"))
        self.what = ChoiceField("Curve", CHOICES)
        self.shaft = ChoiceField("Curve of shaft", SHAFTS)
        self.copy = QPushButton(icon("copy"), "")
        self.trouble = Words("", "failed")
        self.told = Words("", "quiet")
        self.checks = Words("", "failed")
        self.cautions = Words("", "quiet")
        self.numbers = ResultNumbers(session)
        self.plot = CurvePlot(session, "Curve of the drive")
        self._views = QStackedWidget()
        self._lay_out()
        self.switch.chosen.connect(self._show_other)
        for field in (self.what, self.shaft):
            field.chosen.connect(lambda _value: self._refresh_view())
        self.copy.clicked.connect(self.copy_shown)
        for signal in (session.changed, session.shown_differently):
            signal.connect(self._outdated)

    def _lay_out(self) -> None:
        for words in (self.trouble, self.told, self.checks, self.cautions):
            words.setWordWrap(True)
        self.what.setToolTip("What is drawn.")
        self.shaft.setToolTip("The shaft that the torque is given at: what it needs for itself and all it drives.")
        head = QHBoxLayout()
        head.setSpacing(GRID)
        for control in (self.switch, self.what, self.shaft):
            head.addWidget(control)
        head.addStretch(1)
        head.addWidget(self.copy)
        for view in (self.numbers, self.plot):
            self._views.addWidget(view)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, GRID, 2 * GRID, GRID)
        layout.setSpacing(GRID)
        layout.addLayout(head)
        for told in (self.trouble, self.told, self.checks):
            layout.addWidget(told)
        layout.addWidget(self._views, 1)
        layout.addStretch(0)
        layout.addWidget(self.cautions)
        self._show_controls()

    def showEvent(self, event: QShowEvent) -> None:
        """Work out what has changed while nobody looked."""
        super().showEvent(event)
        if self._stale:
            self.refresh()

    def _outdated(self) -> None:
        self._stale = True
        if self.isVisible():
            self.refresh()

    def refresh(self) -> None:
        """Show the answer as it is now, or the sentence that says why there is none."""
        self._stale = False
        if self.session.machine.at_once is not self.session.machine:
            self._show_trouble("")
            self._say(self.told, BEING_WORKED_OUT)
            return
        try:
            answer = self.session.machine.drive_answer
        except MasswrightError as error:
            self._show_trouble(str(error))
            return
        if not self.session.machine.has_drive and not self.session.assembly.members:
            self._show_trouble("")
            self._say(self.told, EMPTY)
            return
        self._show_answer(answer)

    def _show_trouble(self, sentence: str) -> None:
        """Take all numbers away, so that none is left that is no longer true."""
        self._say(self.trouble, sentence)
        for words in (self.told, self.checks, self.cautions):
            self._say(words, "")
        self._views.hide()
        for widget in (self.switch, self.what, self.shaft, self.copy):
            widget.hide()

    def _show_answer(self, answer: DriveAnswer) -> None:
        self._say(self.trouble, "")
        self._say(self.told, WITHOUT_DUTY if answer.study is None else "")
        self._say(self.checks, "   ".join(f"✗ {check.text}." for check in answer.checks if not check.ok))
        self._say(self.cautions, " ".join(answer.cautions))
        self._views.show()
        self._show_controls()
        self._refresh_view()

    @staticmethod
    def _say(words: Words, text: str) -> None:
        words.setText(text)
        words.setVisible(bool(text))

    def _show_controls(self) -> None:
        curves = self.switch.current == CURVES
        self.switch.show()
        self.what.setVisible(curves)
        self.shaft.setVisible(curves and self.what.currentData() in OF_EITHER_SHAFT)
        self.copy.show()
        self.copy.setText("Copy curve" if curves else "Copy tables")
        self.copy.setToolTip(
            "Copies every point of the curve with all its columns, tab-separated, for a spreadsheet." if curves
            else "Copies every table with its title and headings, tab-separated, for a spreadsheet."
        )

    def _show_other(self, at: int) -> None:
        self._views.setCurrentIndex(at)
        self._show_controls()
        self._refresh_view()

    def _refresh_view(self) -> None:
        """Show the values in the one of the two views that is seen."""
        self._show_controls()
        if self.switch.current == NUMBERS:
            self.numbers.refresh()
            return
        machine = self.session.machine
        answer = machine.drive_answer
        what = self.what.currentData() if answer.study is not None else OVER_TURN
        self.what.setEnabled(answer.study is not None)
        self.what.set_value(what)
        graph = graph_of(answer, machine.drive.limits, self.session.units, what, self.shaft.currentData())
        if graph is not None:
            self.plot.show_graph(graph)

    def copy_shown(self) -> None:
        """Copy the whole curve, or all tables."""
        if self.switch.current == CURVES:
            self.plot.copy_graph()
        else:
            self.numbers.copy_all()

    def copy_selection(self) -> None:
        """Copy the selected cells; where none are, all that is shown."""
        if self._views.isHidden():
            self.session.said.emit("Nothing to copy: the drive cannot be worked out")
        elif self.switch.current == CURVES or not self.numbers.copy_selection():
            self.copy_shown()

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange:
            self.copy.setIcon(icon("copy"))
