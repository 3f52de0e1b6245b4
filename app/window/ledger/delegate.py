"""How a cell of the ledger is painted and edited: figures on one decimal mark, bars for shares, boxes for inputs."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import (
    QAbstractItemModel,
    QEvent,
    QModelIndex,
    QObject,
    QPersistentModelIndex,
    QRect,
    QSize,
    Qt,
)
from PySide6.QtGui import QColor, QFont, QHideEvent, QKeyEvent, QPainter, QPen
from PySide6.QtWidgets import (
    QLineEdit,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QWidget,
)

from app.window.ledger.columns import COLUMNS, INDEX
from app.window.ledger.model import LINE_ROLE, LedgerModel
from app.window.materials import material_completer
from app.window.style import GRID, Colours, Words, colours
from core.assembly import Line

if TYPE_CHECKING:
    from app.window.session import Session

Index = QModelIndex | QPersistentModelIndex
BAR_HEIGHT = 6
ROW_HEIGHT = 26


class LedgerDelegate(QStyledItemDelegate):
    """Paints and edits the cells of the ledger and of its foot."""

    def __init__(self, session: Session, model: LedgerModel, parent: QWidget) -> None:
        super().__init__(parent)
        self._session = session
        self._model = model

    def sizeHint(self, option: QStyleOptionViewItem, index: Index) -> QSize:
        """Return a row of one height, so that long ledgers scroll evenly."""
        return QSize(super().sizeHint(option, index).width() + 2 * GRID, ROW_HEIGHT)

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        """Paint one cell."""
        line = index.data(LINE_ROLE)
        if not isinstance(line, Line):
            return
        c = colours()
        painter.save()
        self._paint_ground(painter, option, line, c)
        font = QFont(option.font)
        font.setBold(line.kind in {"group", "total"})
        painter.setFont(font)
        painter.setPen(_pen(line, index.column(), c))
        text = str(index.data(Qt.ItemDataRole.DisplayRole) or "")
        inner = option.rect.adjusted(GRID, 0, -GRID, 0)
        mark = self._session.decimal_mark
        column = COLUMNS[index.column()]
        if column.key == "share":
            _paint_share(painter, inner, line, text, c)
        elif column.kind is not None:
            room = option.fontMetrics.horizontalAdvance(mark + "0" * self._model.longest_tail(index.column()))
            _paint_figure(painter, inner, text, mark, room)
        else:
            side = Qt.AlignmentFlag.AlignRight if column.key == "count" else Qt.AlignmentFlag.AlignLeft
            words = painter.fontMetrics().elidedText(text, Qt.TextElideMode.ElideRight, inner.width())
            painter.drawText(inner, int(side | Qt.AlignmentFlag.AlignVCenter), words)
        if LedgerModel.is_input(line, index.column()) and column.key != "name":
            painter.setPen(QPen(QColor(c.hairline), 1))
            painter.drawRect(option.rect.adjusted(2, 3, -3, -4))
        if option.state & QStyle.StateFlag.State_HasFocus:
            painter.setPen(QPen(QColor(c.blue), 1))
            painter.drawRect(option.rect.adjusted(0, 0, -1, -1))
        painter.restore()

    def _paint_ground(self, painter: QPainter, option: QStyleOptionViewItem, line: Line, c: Colours) -> None:
        if line.key in self._session.selected or option.state & QStyle.StateFlag.State_Selected:
            painter.fillRect(option.rect, QColor(c.selection))
        elif option.state & QStyle.StateFlag.State_MouseOver:
            painter.fillRect(option.rect, QColor(c.raised))

    def createEditor(self, parent: QWidget, option: QStyleOptionViewItem, index: Index) -> QWidget:
        """Return a plain line to type in; for a material it proposes those of the table."""
        editor = CellEditor(parent, QPersistentModelIndex(index))
        editor.setAccessibleName(COLUMNS[index.column()].heading)
        if index.column() == INDEX["material"]:
            editor.setCompleter(material_completer(self._session.own.materials, editor))
            editor.setPlaceholderText("material, 7850 kg/m³, 1.2 kg")
        return editor

    def setEditorData(self, editor: QWidget, index: Index) -> None:
        """Put the text to edit into the editor, all of it selected."""
        # What is being typed stays when the ledger is judged anew, as by a search that ended in the background.
        if isinstance(editor, QLineEdit) and not editor.isModified():
            editor.setText(str(index.data(Qt.ItemDataRole.EditRole) or ""))
            editor.selectAll()

    def setModelData(self, editor: QWidget, model: QAbstractItemModel, index: Index) -> None:
        """Hand what was typed to the model when the editor is left; a refusal is told at the top of the window."""
        if isinstance(editor, QLineEdit):
            model.setData(index, editor.text(), Qt.ItemDataRole.EditRole)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Take what was typed on Return and Tab; where it is refused, the editor stays and says why."""
        keys = QStyledItemDelegate.EndEditHint
        hints = {
            Qt.Key.Key_Return: keys.SubmitModelCache, Qt.Key.Key_Enter: keys.SubmitModelCache,
            Qt.Key.Key_Tab: keys.EditNextItem, Qt.Key.Key_Backtab: keys.EditPreviousItem,
        }
        if not isinstance(event, QKeyEvent) or event.type() != QEvent.Type.KeyPress or event.key() not in hints:
            return super().eventFilter(watched, event)
        if not isinstance(watched, CellEditor):
            return super().eventFilter(watched, event)
        refusal = self._model.attempt(watched.place, watched.text())
        watched.refuse(refusal)
        if not refusal:
            self.closeEditor.emit(watched, hints[Qt.Key(event.key())])
        return True


class CellEditor(QLineEdit):
    """The line to type in over a cell; it says below itself why what was typed is not taken."""

    def __init__(self, parent: QWidget, place: QPersistentModelIndex) -> None:
        super().__init__(parent)
        self.place = place
        self._ground = parent
        self.wrong = Words("", "failed", parent)
        self.wrong.setObjectName("refusal")
        self.wrong.hide()
        self.textEdited.connect(lambda _text: self.refuse(""))

    def refuse(self, sentence: str) -> None:
        """Say why the text is not taken; "" says nothing."""
        self.setProperty("wrong", "true" if sentence else "false")
        self.style().polish(self)
        self.wrong.setText(sentence)
        self.wrong.adjustSize()
        room = self._ground.rect()
        here = self.geometry()
        x = max(0, min(here.left(), room.right() - self.wrong.width()))
        below = here.bottom() + 2
        fits = below + self.wrong.height() <= room.bottom()
        self.wrong.move(x, below if fits else here.top() - self.wrong.height() - 2)
        self.wrong.raise_()
        self.wrong.setVisible(bool(sentence))

    def hideEvent(self, event: QHideEvent) -> None:
        """Take the sentence away with the editor."""
        self.wrong.hide()
        self.wrong.deleteLater()
        super().hideEvent(event)


def _pen(line: Line, column: int, c: Colours) -> QColor:
    if line.kind == "cut" or not line.counts:
        return QColor(c.quiet)
    if column == INDEX["material"]:
        if line.kind == "part":
            return QColor(c.estimate if line.basis == "not set" else c.text)
        return QColor(c.estimate if line.doubtful else c.quiet)
    if line.mass is None and column >= INDEX["mass"]:
        return QColor(c.quiet)
    return QColor(c.estimate if line.doubtful and column >= INDEX["mass"] else c.text)


def _paint_figure(painter: QPainter, rect: QRect, text: str, mark: str, room: int) -> None:
    """Draw a number with room pixels from its decimal mark to the edge, so that all marks of a column line up."""
    whole, point, part = text.partition(mark)
    # A number too long for its column leaves the line of the marks rather than its first digits.
    middle = max(rect.right() - room, rect.left() - GRID + painter.fontMetrics().horizontalAdvance(whole))
    flags = int(Qt.AlignmentFlag.AlignVCenter)
    painter.drawText(QRect(rect.left() - GRID, rect.top(), middle - rect.left() + GRID, rect.height()),
                     flags | int(Qt.AlignmentFlag.AlignRight), whole)
    painter.drawText(QRect(middle, rect.top(), room + GRID, rect.height()), flags, point + part)


def _paint_share(painter: QPainter, rect: QRect, line: Line, text: str, c: Colours) -> None:
    """Draw the bar of a share with its figure beside it."""
    figure = painter.fontMetrics().horizontalAdvance("100.0 %")
    room = rect.width() - figure - GRID
    if line.share is not None and room > 0:
        length = max(1, round(room * min(line.share, 1.0)))
        bar = QRect(rect.left(), rect.center().y() - BAR_HEIGHT // 2 + 1, length, BAR_HEIGHT)
        painter.fillRect(bar, QColor(c.blue if line.kind == "part" else c.quiet))
    painter.drawText(rect, int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter), text)
