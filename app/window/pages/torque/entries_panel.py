"""A table of entries with the fields of the current one beside it: what the parts of "Train and duty" are made of."""

from __future__ import annotations

from dataclasses import dataclass
from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, QTimer
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import (
    QFrame,
    QHBoxLayout,
    QLineEdit,
    QMenu,
    QPushButton,
    QScrollArea,
    QSplitter,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from app.window.fields import Form
from app.window.pages.swap import swap
from app.window.pages.torque.entries import EntriesModel, EntriesTable, Entry
from app.window.pages.torque.entry_section import EntrySection
from app.window.style import GRID, Words
from core.drive.items import with_item, with_item_doubled, with_items_moved, without_items
from core.handover import tsv_of_block

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtGui import QShowEvent

    from app.window.pages.drive_section import DriveSection
    from app.window.session import Session
    from core.drive import DriveSettings
    from core.machine import Machine



@dataclass(frozen=True)
class Addition:
    """Something that can be added: its words in the menu, the list it goes to, and how one is made."""

    words: str
    holder: str
    make: Callable[[], object]


class EntriesPanel(QWidget):
    """Shows what `entries` gives, and edits it; each kind of list says what its entries are and which fields they have.

    It is brought up to date only while it is seen.
    """

    label_width = 132

    def __init__(self, session: Session, label: str, headings: tuple[str, ...]) -> None:
        super().__init__()
        self.session = session
        self._sections: list[DriveSection] = []
        self._built: object = None
        self._stale = True
        self._shown: Machine | None = None
        self.model = self.make_model(headings)
        self.table = EntriesTable(label, self.model)
        self.advice_words = Words("", "quiet")
        self.wrong = Words("", "failed")
        self.advice_button = QPushButton()
        for words in (self.advice_words, self.wrong):
            words.setWordWrap(True)
            words.hide()
        self.editor = QScrollArea()
        self.editor.setWidgetResizable(True)
        self.editor.setFrameShape(QFrame.Shape.NoFrame)
        self.editor.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.editor.setAccessibleName(f"Fields of {label.lower()}")
        self._settle = QTimer(self, singleShot=True, interval=0)
        self._settle.timeout.connect(self._settle_heights)
        self.editor.verticalScrollBar().rangeChanged.connect(lambda *_: self._settle.start())
        self.buttons = QHBoxLayout()
        self.buttons.setSpacing(GRID // 2)
        self._lay_out()
        self._connect()

    def make_model(self, headings: tuple[str, ...]) -> EntriesModel:
        """Return the model of the table."""
        return EntriesModel(headings, self)

    def _lay_out(self) -> None:
        left = QWidget()
        self.column = column = QVBoxLayout(left)
        column.setContentsMargins(0, 0, GRID, 0)
        column.setSpacing(GRID // 2)
        advice = QHBoxLayout()
        advice.setSpacing(GRID)
        advice.addWidget(self.advice_words, 1)
        advice.addWidget(self.advice_button)
        column.addLayout(advice)
        column.addWidget(self.table, 1)
        column.addWidget(self.wrong)
        column.addLayout(self.buttons)
        self._fill_buttons()
        self.halves = QSplitter(Qt.Orientation.Horizontal)
        self.halves.addWidget(left)
        self.halves.addWidget(self.editor)
        self.halves.setHandleWidth(1)
        self.halves.setChildrenCollapsible(False)
        self.halves.setSizes([400, 380])
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.halves)

    def _fill_buttons(self) -> None:
        self.add = QToolButton()
        self.add.setText("Add")
        self.add.setAccessibleName(f"Add to {self.table.accessibleName().lower()}")
        self.add.setPopupMode(QToolButton.ToolButtonPopupMode.InstantPopup)
        menu = QMenu(self.add)
        holder = ""
        for addition in self.additions():
            if holder and addition.holder != holder:
                menu.addSeparator()
            holder = addition.holder
            menu.addAction(addition.words, partial(self.add_entry, addition))
        self.add.setMenu(menu)
        first = self.additions()[0]
        self.advice_button.setText(f"Add a {first.words.lower()}")
        self.advice_button.clicked.connect(lambda _checked=False: self.add_entry(first))
        self.buttons.addWidget(self.add)
        self.remove_button = self._button("Delete", self.remove, "Deletes the selected rows (Delete)")
        self.double_button = self._button("Duplicate", self.double, "Puts a copy behind the current row (Ctrl+D)")
        self.up_button = self._button("Up", lambda: self.move_rows(-1), "Moves the selected rows up (Alt+Up)")
        self.down_button = self._button("Down", lambda: self.move_rows(1), "Moves the selected rows down (Alt+Down)")
        self.buttons.addStretch(1)

    def _button(self, words: str, call: Callable[[], None], tip: str) -> QPushButton:
        button = QPushButton(words)
        button.setStyleSheet("padding: 2px 8px;")
        button.setToolTip(tip)
        button.clicked.connect(lambda _checked=False: call())
        self.buttons.addWidget(button)
        return button

    def _connect(self) -> None:
        table = self.table
        table.chosen.connect(self._choose)
        table.moved.connect(self.move_rows)
        table.removed.connect(self.remove)
        table.doubled.connect(self.double)
        table.opened.connect(self.open_fields)
        table.copying.connect(self.copy_selection)
        self.session.changed.connect(self._follow)
        self.session.shown_differently.connect(self.refresh)

    # What a kind of list says of itself

    def entries(self) -> list[Entry]:
        """Return the rows."""
        raise NotImplementedError

    def additions(self) -> list[Addition]:
        """Return what can be added."""
        raise NotImplementedError

    def sections(self, form: Form, entry: Entry) -> list[DriveSection]:
        """Return the fields of an entry."""
        raise NotImplementedError

    def fields_depend_on(self, entry: Entry) -> object:
        """Return what decides, besides its kind, which fields an entry has."""
        return ()

    def advice(self) -> str:
        """Return what to do next, where nothing is entered yet."""
        return ""

    # Showing

    def showEvent(self, event: QShowEvent) -> None:
        """Catch up with what changed out of sight."""
        super().showEvent(event)
        if self._stale:
            self.refresh()

    def _follow(self) -> None:
        """Show another document; what is being typed or refused stays when the same one is judged anew."""
        if self.session.machine is not self._shown:
            self.refresh()

    def refresh(self) -> None:
        """Show the entries as they are now, the current row staying where it is."""
        self._stale = not self.isVisible()
        if self._stale:
            return
        self._shown = self.session.machine
        kept, row = [entry.root for entry in self.table.selected], max(self.table.currentIndex().row(), 0)
        self.model.show(self.entries())
        self._advise()
        if not self.table.selected and self.model.entries:
            nearest = self.model.entries[min(row, len(self.model.entries) - 1)].root
            self.table.select([root for root in kept if self.model.row_of(root) >= 0] or [nearest])
        self.tell("")
        self._show_fields()

    def _advise(self) -> None:
        words = self.advice()
        self.advice_words.setText(words)
        for widget in (self.advice_words, self.advice_button):
            widget.setVisible(bool(words))

    def tell(self, sentence: str) -> None:
        """Say in place what is refused; "" says nothing."""
        self.wrong.setText(sentence)
        self.wrong.setVisible(bool(sentence))

    def _choose(self) -> None:
        self.tell("")
        self._show_fields()

    def _show_fields(self) -> None:
        entry = self.table.current
        wanted = None if entry is None else (type(entry.item), entry.holder == "", self.fields_depend_on(entry))
        if wanted != self._built or entry is None:
            self._built = wanted
            self._build(entry)
        if entry is not None:
            for section in self._sections:
                if isinstance(section, EntrySection):
                    section.aim(entry.root, entry.name)
                section.show()
        self._allow()

    def _build(self, entry: Entry | None) -> None:
        page = QWidget()
        page.setObjectName("page")
        layout = QVBoxLayout(page)
        layout.setContentsMargins(GRID, 0, 0, GRID)
        for section in self._sections:
            section.drop()
        self._sections = []
        if entry is not None:
            form = Form(self.label_width)
            self._sections = self.sections(form, entry)
            for section in self._sections:
                if isinstance(section, EntrySection):
                    section.told = self.tell
            layout.addWidget(form)
        layout.addStretch(1)
        swap(self.editor, page)

    def _settle_heights(self) -> None:
        """Let a sentence below a field have the room that it needs beside the scroll bar, too."""
        for form in self.editor.findChildren(Form):
            form.lay_out_anew()

    def _allow(self) -> None:
        listed = [entry for entry in self.table.selected if entry.holder]
        single = self.table.current is not None and bool(self.table.current.holder)
        self.remove_button.setEnabled(bool(listed))
        self.double_button.setEnabled(single)
        for button in (self.up_button, self.down_button):
            button.setEnabled(bool(listed))

    # Edits

    def attempt(self, words: str, change: Callable[[DriveSettings], DriveSettings]) -> bool:
        """Do an edit under words for undo; a refusal is told below the table. Return whether it was taken."""
        refusal = self.session.attempt_drive(words, change)
        self.tell(refusal)
        return not refusal

    def add_entry(self, addition: Addition) -> None:
        """Add an entry behind the current one of its list, or at the end; the keyboard goes to its first number."""
        item, holder = addition.make(), addition.holder
        at = self.place_for(holder)
        if self.attempt(f"Add {self.words_of(item)}", lambda settings: with_item(settings, holder, item, at)):
            self.table.select([f"{holder}.{at}"])
            self.open_fields()

    def place_for(self, holder: str) -> int:
        """Return where in a list a new entry goes: behind the current one, if that is in the list, or at its end."""
        here = self.table.current
        if here is not None and here.holder == holder:
            return here.index + 1
        return sum(entry.holder == holder for entry in self.model.entries)

    def words_of(self, item: object) -> str:
        """Return what an entry is called in the words for undo."""
        return str(getattr(item, "name", ""))

    def remove(self) -> None:
        """Take the selected entries out."""
        chosen = [entry for entry in self.table.selected if entry.holder]
        if not chosen:
            return
        words = chosen[0].name if len(chosen) == 1 else f"{len(chosen)} rows"
        row = self.model.row_of(chosen[0].root)

        def change(settings: DriveSettings) -> DriveSettings:
            # What lies deeper first, so that no path leads astray.
            for holder in sorted({entry.holder for entry in chosen}, key=len, reverse=True):
                there = [entry.index for entry in chosen if entry.holder == holder]
                settings = without_items(settings, holder, there)
            return settings

        if self.attempt(f"Delete {words}", change) and self.model.entries:
            self.table.select([self.model.entries[min(row, len(self.model.entries) - 1)].root])

    def double(self) -> None:
        """Put a copy of the current entry behind it."""
        entry = self.table.current
        if entry is None or not entry.holder:
            return
        holder, index = entry.holder, entry.index
        if self.attempt(f"Duplicate {entry.name}", lambda settings: with_item_doubled(settings, holder, index)):
            self.table.select([f"{holder}.{index + 1}"])

    def move_rows(self, step: int) -> None:
        """Move the selected entries of one list up or down in it."""
        chosen = [entry for entry in self.table.selected if entry.holder]
        if not chosen or any(entry.holder != chosen[0].holder for entry in chosen):
            return
        holder, indices = chosen[0].holder, [entry.index for entry in chosen]
        to = indices[0] + step
        last = sum(entry.holder == holder for entry in self.model.entries) - len(indices)
        if not 0 <= to <= last:
            return
        words = chosen[0].name if len(chosen) == 1 else f"{len(chosen)} rows"
        if self.attempt(f"Move {words}", lambda settings: with_items_moved(settings, holder, indices, to)):
            self.table.select([f"{holder}.{to + at}" for at in range(len(indices))])

    def copy_selection(self) -> None:
        """Put what the selected rows say on the clipboard, tab-separated."""
        columns = range(len(self.model.headings))
        rows = [[self.model.text(entry, column) for column in columns] for entry in self.table.selected]
        if rows:
            QGuiApplication.clipboard().setText(tsv_of_block(rows, self.session.decimal_mark))
        self.session.said.emit(f"Copied {len(rows)} rows" if rows else "Nothing is selected that could be copied")

    def open_fields(self) -> None:
        """Put the keyboard into the first number of the current entry, its text selected."""
        lines = self.editor.findChildren(QLineEdit)
        wanted = [line for line in lines if line.accessibleName() != "Name"] or lines
        if wanted:
            wanted[0].setFocus(Qt.FocusReason.OtherFocusReason)
            wanted[0].selectAll()
