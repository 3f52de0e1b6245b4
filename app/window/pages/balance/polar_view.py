"""The view "Polar plot": the plot, and beside it a table of the same values."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QAbstractItemView,
    QHBoxLayout,
    QHeaderView,
    QTableWidget,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from app.window.numbers import shown
from app.window.pages.balance.polar import PolarMark, PolarPicture, PolarPlot, is_drawn
from app.window.style import GRID, Words
from core.drive.axis import zero_mark
from core.drive.vectors import vectors_of
from core.handover.balance_lines import angle_of
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.drive import BalanceAnswer

ROW_HEIGHT = 24
TABLE_WIDTH = 340


class PolarView(QWidget):
    """Plot and table."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self._session = session
        self.plot = PolarPlot()
        self.table = QTableWidget()
        self.table.setAccessibleName("Unbalance vectors of the plot")
        self.table.verticalHeader().hide()
        self.table.verticalHeader().setDefaultSectionSize(ROW_HEIGHT)
        self.table.setShowGrid(False)
        self.table.setTabKeyNavigation(False)
        self.table.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.table.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.table.setFixedWidth(TABLE_WIDTH)
        self.table.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.table.setMinimumHeight(3 * ROW_HEIGHT)
        self.says = Words("", "quiet")
        self.says.setWordWrap(True)
        self.says.setMaximumWidth(TABLE_WIDTH)
        beside = QVBoxLayout()
        beside.addWidget(self.table, 1)
        beside.addWidget(self.says)
        beside.addStretch()
        layout = QHBoxLayout(self)
        layout.setContentsMargins(2 * GRID, 0, 2 * GRID, 0)
        layout.setSpacing(2 * GRID)
        layout.addWidget(self.plot, 1)
        layout.addLayout(beside)

    def show_answer(self, answer: BalanceAnswer | None) -> None:
        """Show the vectors; none where there is no answer."""
        picture = PolarPicture() if answer is None else self._picture(answer)
        self.plot.show_picture(picture)
        self._fill(picture)
        self.says.setText("" if answer is None else self._note(answer, picture))

    def _picture(self, answer: BalanceAnswer) -> PolarPicture:
        session, unit = self._session, self._session.units[Kind.UNBALANCE]
        marks = tuple(
            PolarMark(
                one.name, unit.from_si(one.amount), angle_of(one.unbalance),
                None if one.permitted is None else unit.from_si(one.permitted),
            )
            for one in vectors_of(answer, session.drive.balance)
        )
        sentences = [self._sentence(mark, unit.symbol) for mark in marks]
        return PolarPicture(marks, unit.symbol, session.decimal_mark, " ".join(sentences))

    def _sentence(self, mark: PolarMark, unit: str) -> str:
        size, angle, permitted = self._cells(mark)
        at = "" if mark.angle is None else f" at {angle}°"
        most = "" if mark.permitted is None else f", permitted {permitted} {unit}"
        return f"{mark.name}: {size} {unit}{at}{most}."

    def _cells(self, mark: PolarMark) -> tuple[str, str, str]:
        """Return size, angle in degrees, and what is permitted, as they are read."""
        number, degree = self._session.units[Kind.NUMBER], None if mark.angle is None else math.degrees(mark.angle)
        values = (mark.size, degree, mark.permitted)
        size, angle, permitted = (shown(self._session, value, number) for value in values)
        return size, angle, permitted

    def _fill(self, picture: PolarPicture) -> None:
        self.table.setColumnCount(4)
        self.table.setHorizontalHeaderLabels([
            "vector", f"unbalance\n{picture.unit}", "angle\n°", f"permitted\n{picture.unit}",
        ])
        self.table.setRowCount(len(picture.marks))
        for row, mark in enumerate(picture.marks):
            for column, text in enumerate((mark.name, *self._cells(mark))):
                item = QTableWidgetItem(text)
                side = Qt.AlignmentFlag.AlignRight if column else Qt.AlignmentFlag.AlignLeft
                item.setTextAlignment(side | Qt.AlignmentFlag.AlignVCenter)
                self.table.setItem(row, column, item)
        header = self.table.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setStretchLastSection(True)
        self.table.setMaximumHeight(header.sizeHint().height() + len(picture.marks) * ROW_HEIGHT + 4)

    @staticmethod
    def _note(answer: BalanceAnswer, picture: PolarPicture) -> str:
        """Return how the plot is to be read, and what has no room in it."""
        zero = f"Seen with {answer.axis.name} pointing at you: 0° is the document's {zero_mark(answer.axis)}"
        said = [f"{zero}, angles run anticlockwise, arrows point to the heavy side."]
        limits = [mark for mark in picture.marks if mark.permitted is not None]
        hidden = [mark.name for mark in limits if not is_drawn(picture, mark)]
        if hidden:
            said.append(f"What is permitted for {', '.join(hidden)} cannot be drawn as a circle at this scale.")
        return " ".join(said)
