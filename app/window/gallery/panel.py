"""What "Add shape" opens beside the view: choose a picture, type its dimensions, keep it as a line or drop it."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QKeySequence, QShortcut
from PySide6.QtWidgets import (
    QAbstractButton,
    QApplication,
    QFrame,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QScrollArea,
    QStackedWidget,
    QVBoxLayout,
    QWidget,
)

from app.window.fields import Form, QuantityField
from app.window.gallery.chooser import Chooser
from app.window.numbers import shown
from app.window.outline.section import OutlineSection, is_profile
from app.window.pages.part_body import ShapeSection
from app.window.pages.part_mass import MassSection
from app.window.session import Session
from app.window.style import GRID, Words, heading_font
from core.assembly import Assembly, Driver, Part, ShapeBody, ledger_of
from core.errors import MasswrightError
from core.machine import Machine
from core.material import NotSet
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.gallery.families import Choice
    from app.window.pages.section import Section
    from core.shapes import Shape

DRAFT = "draft"


class GalleryPanel(QStackedWidget):
    """First the pictures, then the one that was chosen.

    Signals:
        previewed: the part as it would be; None when there is none.
        kept: the part that was made; the receiver gives it its key and a free name.
        closed: nothing more is to be added.
    """

    previewed = Signal(object)
    kept = Signal(object)
    closed = Signal()

    def __init__(self, session: Session) -> None:
        super().__init__()
        self.setObjectName("page")
        self.setAccessibleName("Gallery of shapes")
        self.chooser = Chooser()
        self.maker = Maker(session)
        choosing = QWidget()
        choosing.setObjectName("page")
        layout = QVBoxLayout(choosing)
        layout.setContentsMargins(0, GRID, 0, 0)
        head = QHBoxLayout()
        head.setContentsMargins(2 * GRID, 0, 2 * GRID, 0)
        title = QLabel("Add a shape")
        title.setFont(heading_font(title))
        self.leave = QPushButton("Close")
        head.addWidget(title)
        head.addStretch(1)
        head.addWidget(self.leave)
        layout.addLayout(head)
        layout.addWidget(self.chooser, 1)
        self.addWidget(choosing)
        self.addWidget(self.maker)
        self.chooser.chosen.connect(self.make)
        self.leave.clicked.connect(self.close_gallery)
        self.maker.back.clicked.connect(self.open_gallery)
        self.maker.drop.clicked.connect(self.close_gallery)
        self.maker.keep.clicked.connect(lambda: self._keep(again=False))
        self.maker.again.clicked.connect(lambda: self._keep(again=True))
        self.maker.previewed.connect(self.previewed)
        escape = QShortcut(QKeySequence(Qt.Key.Key_Escape), self)
        escape.setContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
        escape.activated.connect(self.close_gallery)

    def open_gallery(self) -> None:
        """Show the pictures."""
        self.previewed.emit(None)
        self.setCurrentIndex(0)
        self.chooser.start()

    def make(self, choice: Choice) -> None:
        """Show one shape with its fields, its text selected to be typed over."""
        self.setCurrentWidget(self.maker)
        self.maker.start(choice)

    def close_gallery(self) -> None:
        """Drop what was being made."""
        self.maker.stop()
        self.previewed.emit(None)
        self.closed.emit()

    def _keep(self, *, again: bool) -> None:
        part = self.maker.finished()
        if part is None:
            return
        self.previewed.emit(None)
        self.kept.emit(part)
        if again:
            self.maker.go_on()
        else:
            self.maker.stop()
            self.closed.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Keep what is being made with Return; on a button Return presses it."""
        if event.key() not in (Qt.Key.Key_Return, Qt.Key.Key_Enter) or self.currentWidget() is not self.maker:
            super().keyPressEvent(event)
            return
        focused = QApplication.focusWidget()
        if isinstance(focused, QAbstractButton):
            focused.click()
        else:
            self._keep(again=False)


class Maker(QWidget):
    """One shape being made: its fields edit a draft of their own, so that dropping it leaves no trace."""

    previewed = Signal(object)

    def __init__(self, session: Session) -> None:
        super().__init__()
        self.setObjectName("page")
        self._session = session
        self._draft: Session | None = None
        self._sections: list[Section] = []
        self._driver: Driver = NotSet()
        self.back = QPushButton("All shapes")
        self.keep = QPushButton("Keep")
        self.keep.setToolTip("Adds it as a line of the ledger (Return)")
        self.again = QPushButton("Keep and add another")
        self.drop = QPushButton("Drop")
        self.drop.setToolTip("Leaves the document as it was (Escape)")
        self.result = Words()
        self.result.setWordWrap(True)
        self._title = QLabel()
        self._title.setFont(heading_font(self._title))
        self._page = QScrollArea()
        self._page.setWidgetResizable(True)
        self._page.setFrameShape(QFrame.Shape.NoFrame)
        self._page.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self._page.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self._lay_out()
        session.shown_differently.connect(self._follow_units)

    def _lay_out(self) -> None:
        head, foot = QHBoxLayout(), QHBoxLayout()
        head.addWidget(self._title)
        head.addStretch(1)
        head.addWidget(self.back)
        for button in (self.keep, self.again, self.drop):
            foot.addWidget(button)
        foot.addStretch(1)
        self.keep.setDefault(True)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, GRID, 2 * GRID, GRID)
        layout.addLayout(head)
        layout.addWidget(self._page, 1)
        layout.addWidget(self.result)
        layout.addLayout(foot)

    def start(self, choice: Choice) -> None:
        """Make a shape, from the dimensions of its picture."""
        self.stop()
        part = Part(DRAFT, choice.title, ShapeBody(choice.shape), NotSet())
        if part.measure == "volume":
            part = replace(part, driver=self._driver)
        draft = Session(self)
        draft.units, draft.decimal_mark = self._session.units, self._session.decimal_mark
        real = self._session.assembly
        draft.take(Machine(Assembly(real.name, (part,), real.axes, real.drive, names=real.names)), None)
        draft.select(frozenset({DRAFT}))
        draft.changed.connect(self._show)
        draft.refused.connect(self._refuse)
        self._draft = draft
        self._title.setText(choice.title[:1].upper() + choice.title[1:])
        form = Form()
        form.setObjectName("page")
        form.setAttribute(Qt.WidgetAttribute.WA_StyledBackground, on=True)
        body = ShapeSection(draft, form, part)
        body.tried = self._try
        self._sections = [body, *self._outline(draft, form, part), MassSection(draft, form, part)]
        self._page.setWidget(form)
        self.go_on()

    def _outline(self, draft: Session, form: Form, part: Part) -> list[Section]:
        if not is_profile(part):
            return []
        section = OutlineSection(draft, form, part)
        section.tried = self._try
        return [section]

    def go_on(self) -> None:
        """Put the keyboard into the first dimension, its text selected."""
        self._show()
        for section in self._sections:
            if isinstance(section, ShapeSection):
                field = section.first_field()
                field.line.setFocus(Qt.FocusReason.OtherFocusReason)
                field.line.selectAll()

    def stop(self) -> None:
        """Forget what is being made."""
        if self._draft is not None:
            self._draft.changed.disconnect(self._show)
            self._draft.deleteLater()
            self._draft = None
        self._sections = []
        old = self._page.takeWidget()
        if old is not None:
            old.hide()
            old.deleteLater()

    def finished(self) -> Part | None:
        """Return the part as its fields say it; None where a field says why it cannot be."""
        part = self._part()
        wrong = [field for field in self._page.findChildren(QuantityField) if not field.wrong.isHidden()]
        mending = any(isinstance(each, OutlineSection) and each.refusal for each in self._sections)
        if part is None or wrong or mending:
            for field in wrong[:1]:
                field.line.setFocus(Qt.FocusReason.OtherFocusReason)
            return None
        if part.measure == "volume":
            self._driver = part.driver
        return part

    def _part(self) -> Part | None:
        node = self._draft.assembly.node(DRAFT) if self._draft is not None else None
        return node if isinstance(node, Part) else None

    def _show(self) -> None:
        part = self._part()
        if part is None:
            return
        for section in self._sections:
            section.show(part)
        self._say(part)
        self.previewed.emit(part)

    def _try(self, shape: Shape | None, refusal: str) -> None:
        """Show in the view, and in numbers, what is being typed."""
        part = self._part()
        if part is None:
            return
        if shape is None:
            self._refuse(refusal)
            return
        trial = replace(part, body=ShapeBody(shape))
        self._say(trial)
        self.previewed.emit(trial)

    def _say(self, part: Part) -> None:
        """Say what the part would weigh, and its inertia about the drive axis."""
        real, units = self._session.assembly, self._session.units
        try:
            total = ledger_of(Assembly(real.name, (part,), real.axes, real.drive)).total
        except MasswrightError as error:
            self._refuse(str(error))
            return
        self.result.set_role("text")
        if total.mass is None or total.inertia is None:
            self.result.setText("Its mass is not known yet: choose what says it, now or later.")
            return
        mass = f"{shown(self._session, total.mass, units[Kind.MASS])} {units[Kind.MASS].symbol}"
        inertia = f"{shown(self._session, total.inertia, units[Kind.INERTIA])} {units[Kind.INERTIA].symbol}"
        self.result.setText(f"It would weigh {mass}; J about {real.drive} {inertia}.")

    def _refuse(self, sentence: str) -> None:
        self.result.set_role("failed")
        self.result.setText(sentence)

    def _follow_units(self) -> None:
        if self._draft is not None:
            self._draft.mark_decimals_with(self._session.decimal_mark)
            self._draft.show_in(self._session.units)
            self._show()
