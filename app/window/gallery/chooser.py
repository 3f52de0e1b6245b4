"""The first half of the gallery: all pictures in their groups, and a line that searches them."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QObject, QSize, Qt, QTimer, Signal
from PySide6.QtGui import QIcon, QKeyEvent, QPixmap, QResizeEvent, QShowEvent
from PySide6.QtWidgets import QLineEdit, QListView, QListWidget, QListWidgetItem, QVBoxLayout, QWidget

from app.window.gallery.families import Choice, best_of, choices
from app.window.gallery.picture import Wanted, image_of
from app.window.style import GRID, Words, colours, heading_font

PICTURE = 112
# Room for a picture and two lines of its name.
CELL = QSize(PICTURE + 24, PICTURE + 46)
HEADING_HEIGHT = 32
CHOICE = Qt.ItemDataRole.UserRole


class Chooser(QWidget):
    """Shows what can be added; tells which picture was chosen."""

    chosen = Signal(object)

    def __init__(self) -> None:
        super().__init__()
        self.search = QLineEdit()
        self.search.setPlaceholderText("Search: tube, thin, IPE 200 …")
        self.search.setAccessibleName("Search the gallery")
        self.search.setClearButtonEnabled(True)
        self.pictures = Pictures()
        self.nothing = Words("No shape or size has that name.", "quiet")
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, GRID, GRID, 0)
        layout.setSpacing(GRID)
        for widget in (self.search, self.nothing, self.pictures):
            layout.addWidget(widget)
        layout.setStretch(2, 1)
        self.search.textChanged.connect(self.fill)
        self.search.installEventFilter(self)
        self.pictures.activated.connect(lambda index: self._choose(self.pictures.itemFromIndex(index)))
        self.pictures.itemClicked.connect(self._choose)

    def start(self) -> None:
        """Show everything, with the keyboard in the search line."""
        if self.search.text():
            self.search.clear()
        else:
            self.fill("")
        self.search.setFocus(Qt.FocusReason.OtherFocusReason)

    def fill(self, text: str) -> None:
        """Show what is found."""
        found = choices(text)
        self.pictures.show_choices(found, best_of(found, text) if found else 0)
        self.nothing.setVisible(not found)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Let Down go from the search line into the pictures, and Return choose the first or current one."""
        if watched is self.search and isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress:
            if event.key() == Qt.Key.Key_Down:
                self.pictures.setFocus(Qt.FocusReason.TabFocusReason)
                return True
            if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
                self._choose(self.pictures.currentItem())
                return True
        return super().eventFilter(watched, event)

    def _choose(self, item: QListWidgetItem | None) -> None:
        choice = item.data(CHOICE) if item is not None else None
        if isinstance(choice, Choice):
            self.chosen.emit(choice)


class Pictures(QListWidget):
    """The pictures under the headings of their groups; they are painted one after the other, the window alive."""

    def __init__(self) -> None:
        super().__init__()
        self.setAccessibleName("Shapes")
        self.setObjectName("pictures")
        self.setViewMode(QListView.ViewMode.IconMode)
        self.setMovement(QListView.Movement.Static)
        self.setResizeMode(QListView.ResizeMode.Adjust)
        self.setIconSize(QSize(PICTURE, PICTURE))
        self.setWordWrap(True)
        self.setTextElideMode(Qt.TextElideMode.ElideNone)
        self.setFrameShape(QListWidget.Shape.NoFrame)
        self.setVerticalScrollMode(QListWidget.ScrollMode.ScrollPerPixel)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOn)
        self._waiting: list[QListWidgetItem] = []
        self._painting = QTimer(self, interval=0)
        self._painting.timeout.connect(self._paint_next)

    def show_choices(self, found: list[Choice], current: int = 0) -> None:
        """Show these, one of them current."""
        self._waiting = []
        self.clear()
        group = ""
        for choice in found:
            if choice.group != group:
                group = choice.group
                self._add_heading(group)
            item = QListWidgetItem(choice.title, self)
            item.setData(CHOICE, choice)
            item.setSizeHint(CELL)
            item.setTextAlignment(Qt.AlignmentFlag.AlignHCenter | Qt.AlignmentFlag.AlignTop)
            item.setIcon(_clear())
        if found:
            self.setCurrentItem(self.shown()[current])
        self._paint_all()

    def shown(self) -> list[QListWidgetItem]:
        """Return the pictures, without the headings."""
        return [self.item(row) for row in range(self.count()) if self.item(row).data(CHOICE) is not None]

    def _add_heading(self, text: str) -> None:
        heading = QListWidgetItem(text, self)
        heading.setFlags(Qt.ItemFlag.NoItemFlags)
        heading.setFont(heading_font(self))
        heading.setSizeHint(self._heading_size())
        heading.setTextAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignBottom)

    def _heading_size(self) -> QSize:
        return QSize(max(CELL.width(), self.viewport().width() - GRID), HEADING_HEIGHT)

    def _paint_all(self) -> None:
        self._waiting = self.shown()
        self._painting.start()

    def _paint_next(self) -> None:
        if not self._waiting or not self.isVisible():
            self._painting.stop()
            return
        # Those in sight first.
        sight = self.viewport().rect()
        seen = (at for at, item in enumerate(self._waiting) if self.visualItemRect(item).intersects(sight))
        item = self._waiting.pop(next(seen, 0))
        choice = item.data(CHOICE)
        wanted = Wanted(
            choice.shape, PICTURE, PICTURE, self.devicePixelRatioF(), self.font().family(), colours()
        )
        pixmap = QPixmap.fromImage(image_of(wanted))
        drawn = QIcon(pixmap)
        # The same when selected: the picture is not tinted, its ground is.
        drawn.addPixmap(pixmap, QIcon.Mode.Selected)
        item.setIcon(drawn)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Choose with Return; every other key as in any list."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space):
            self.activated.emit(self.currentIndex())
            return
        super().keyPressEvent(event)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Keep the headings as wide as the list."""
        super().resizeEvent(event)
        for row in range(self.count()):
            if self.item(row).data(CHOICE) is None:
                self.item(row).setSizeHint(self._heading_size())

    def changeEvent(self, event: QEvent) -> None:
        """Paint the pictures again in another theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and hasattr(self, "_painting"):
            self._paint_all()

    def showEvent(self, event: QShowEvent) -> None:
        """Go on painting what was left."""
        super().showEvent(event)
        self._paint_all()


def _clear() -> QIcon:
    """Return an icon that keeps the room of a picture to come."""
    pixmap = QPixmap(PICTURE, PICTURE)
    pixmap.fill(Qt.GlobalColor.transparent)
    return QIcon(pixmap)
