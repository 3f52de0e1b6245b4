"""The menus and the toolbar: every command once, with its key, its words and its drawing."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QAction, QActionGroup, QKeySequence
from PySide6.QtWidgets import QMenu, QSizePolicy, QToolBar, QToolButton, QWidget

from app.window.commands import drive_about_part, lay_on_drive_axis
from app.window.dialogs.axis import AxisDialog
from app.window.dialogs.take_apart import TakeApartDialog
from app.window.fields import ChoiceField
from app.window.start import fill_samples
from app.window.style import GRID, Words, icon
from core.quantity import UNIT_SETS
from core.shapes import SHAPES

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.main import MainWindow
    from core.assembly import DriveAxis

Keys = QKeySequence.StandardKey
LOOKS = (("front", "1"), ("back", "2"), ("left", "3"), ("right", "4"), ("top", "5"), ("bottom", "6"), ("iso", "7"))


@dataclass(frozen=True)
class Command:
    """One command of a menu."""

    words: str
    call: Callable[[], object]
    keys: Keys | str | None = None
    drawing: str = ""
    tip: str = ""


class Actions:
    """Makes the actions of a window, and keeps those whose words or state change."""

    def __init__(self, window: MainWindow) -> None:
        self._window = window
        self.drawn: dict[QAction, str] = {}
        self.undo = self._action(Command("Undo", window.undo, Keys.Undo, "undo"))
        self.redo = self._action(Command("Redo", window.redo, Keys.Redo, "redo"))
        self.save = self._action(Command("Save", window.save, Keys.Save))
        self.shapes = self._shapes_menu()
        self.samples = QMenu("Open a sample", window)
        fill_samples(self.samples, window.files.open_sample)
        self.recent = QMenu("Open recent", window)
        self.axes = ChoiceField("Drive axis", [])
        self.units = ChoiceField("Units", [(name, name) for name in UNIT_SETS])
        self.variants = ChoiceField("Variant", [])
        self._variant_shown: list[QAction] = []
        self._menus()
        self._toolbar()

    def _action(self, command: Command) -> QAction:
        action = QAction(command.words, self._window)
        action.triggered.connect(lambda _checked=False: command.call())
        if command.keys is not None:
            action.setShortcut(QKeySequence(command.keys))
        if command.drawing:
            action.setIcon(icon(command.drawing))
            self.drawn[action] = command.drawing
        action.setToolTip(command.tip or command.words)
        return action

    def _delete_action(self) -> QAction:
        """Return Delete; its key counts only in the ledger and the view, where what it deletes is in sight."""
        w = self._window
        action = self._action(Command("Delete", w.delete, Keys.Delete))
        action.setShortcutContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
        for place in (w.ledger, w.view):
            place.addAction(action)
        return action

    def _fill(self, menu: QMenu, entries: list[Command | QAction | QMenu | None]) -> QMenu:
        for entry in entries:
            if entry is None:
                menu.addSeparator()
            elif isinstance(entry, Command):
                menu.addAction(self._action(entry))
            elif isinstance(entry, QMenu):
                menu.addMenu(entry)
            else:
                menu.addAction(entry)
        return menu

    def _shapes_menu(self) -> QMenu:
        menu = QMenu("Add shape of usual size", self._window)
        for key, shape in SHAPES.items():
            menu.addAction(self._action(Command(shape.title, lambda key=key: self._window.add_shape(key))))  # type: ignore[misc]  # bound now
        return menu

    def _menus(self) -> None:
        w, bar = self._window, self._window.menuBar()
        self._fill(bar.addMenu("&File"), [
            Command("New", w.files.new, Keys.New), Command("Open…", w.files.ask_open, Keys.Open), self.recent,
            self.samples, None,
            self.save, Command("Save as…", w.save_as, Keys.SaveAs), None, Command("Quit", w.close, Keys.Quit),
        ])
        self._fill(bar.addMenu("&Edit"), [
            self.undo, self.redo, None,
            Command("Copy", w.copy, Keys.Copy, tip="Copies the selected cells or values, tab-separated."),
            Command("Copy with headings", w.copy_with_headings, "Ctrl+Shift+C"),
            Command("Copy sheet", w.copy_sheet, "Ctrl+Alt+C"),
            Command("Paste into the ledger", w.ledger.paste, Keys.Paste), None,
            self._delete_action(), None,
            Command("Named dimensions…", w.edit_names, "Ctrl+D", tip="Values that number fields use by their names."),
            Command("Variants…", w.edit_variants, tip="Lines that are in some variants of the machine only."),
        ])
        self._part_menu(bar.addMenu("&Part"))
        self._fill(bar.addMenu("&Axis"), [
            Command("Axes…", w.edit_axes, "Ctrl+Shift+A", tip="All axes, with J of the whole about each."), None,
            Command("Edit drive axis…", lambda: self._ask_axis(w.session.assembly.drive_axis)),
            Command("New axis…", lambda: self._ask_axis(None)),
        ])
        self._fill(bar.addMenu("&Hand-over"), [
            Command("Copy J about the drive axis", w.copy_inertia, "Ctrl+J"), Command("Copy sheet", w.copy_sheet), None,
            self._marks_menu(),
        ])
        self._view_menu(bar.addMenu("&View"))
        self._fill(bar.addMenu("&Help"), [Command("About Masswright", w.show_about)])

    def _part_menu(self, menu: QMenu) -> None:
        """Fill the menu of lines, which the ledger opens over a line, too."""
        w = self._window
        groups = QMenu("Place a group of own list", w)
        groups.aboutToShow.connect(lambda: w.own_list.fill(groups))
        self._fill(menu, [
            Command("Add shape…", w.open_gallery, "Ctrl+B", tip="Opens the gallery of shapes."), self.shapes,
            Command("Add mesh…", w.files.ask_meshes, "Ctrl+M"),
            Command("Add known part…", w.ask_known_part, "Ctrl+K"), None,
            Command("Add group", w.add_group, "Ctrl+G", tip="Puts the selected lines into a new group."),
            Command("Move up", lambda: w.move_line(-1), "Alt+Up"),
            Command("Move down", lambda: w.move_line(1), "Alt+Down"),
            Command("Move out of its group", w.move_out, "Alt+Left"), None,
            Command(
                "Make its axis the drive axis", lambda: drive_about_part(w.session),
                tip="The selected part's own axis becomes the drive axis, and follows the part.",
            ),
            Command(
                "Lay own axis on the drive axis", lambda: lay_on_drive_axis(w.session, w.session.selected), "Ctrl+L",
                tip="Moves the selected lines no further than it takes to lay their own axes on the drive axis.",
            ),
            Command("Take one copy apart…", lambda: w.files.show_dialog(TakeApartDialog(w.session, w))), None,
            Command("Save group as a document…", w.linked.save_group, tip="The group stays; its lines are copied."),
            Command("Place a linked group…", w.linked.place, tip="Shows another document's lines as a group here."),
            Command("Read linked group again…", w.linked.read_again), Command("Break the link", w.linked.break_link),
            None, groups, Command("Keep group in own list", w.own_list.keep_selected_group),
            Command("Own list…", w.own_list.manage, tip="Your own materials, known parts and groups."),
        ])
        tree = w.ledger.tree
        tree.customContextMenuRequested.connect(lambda at: menu.popup(tree.viewport().mapToGlobal(at)))

    def _ask_axis(self, axis: DriveAxis | None) -> None:
        self._window.files.show_dialog(AxisDialog(self._window.session, axis, self._window))

    def _marks_menu(self) -> QMenu:
        menu = QMenu("Decimal mark", self._window)
        group = QActionGroup(menu)
        self.marks: dict[str, QAction] = {}
        for mark, words in ((".", "Point: 0.5053"), (",", "Comma: 0,5053")):
            action = self._action(Command(words, lambda mark=mark: self._window.choose_mark(mark)))  # type: ignore[misc]  # bound now
            action.setCheckable(True)
            group.addAction(action)
            menu.addAction(action)
            self.marks[mark] = action
        return menu

    def _view_menu(self, menu: QMenu) -> None:
        view = self._window.view
        self._fill(menu, [Command("Fit\tF", view.fit)])
        for name, key in LOOKS:
            words = "Isometric" if name == "iso" else name.capitalize()
            menu.addAction(self._action(Command(f"{words}\t{key}", lambda name=name: view.look(name))))  # type: ignore[misc]  # bound now
        menu.addSeparator()
        for words, switch in (
            ("Parallel projection", view.set_parallel), ("See-through", view.set_see_through),
            ("Unbalance arrows", self._window.balance.keep_arrows),
            ("Sort the ledger by share", self._window.ledger.tree.lines.sort_by_share),
        ):
            action = menu.addAction(words)
            action.setCheckable(True)
            action.toggled.connect(switch)
        handles = menu.addAction("Handles for placing")
        handles.setCheckable(True)
        handles.setChecked(self._window.session.manner.handles)
        handles.toggled.connect(self._show_handles)
        menu.addMenu(self._window.ledger.columns)

    def _show_handles(self, wanted: bool) -> None:
        session = self._window.session
        session.set_manner(replace(session.manner, handles=wanted))

    def _toolbar(self) -> None:
        w = self._window
        bar = QToolBar("Tools", w)
        bar.setObjectName("tools")
        bar.setMovable(False)
        bar.setContextMenuPolicy(Qt.ContextMenuPolicy.PreventContextMenu)
        bar.setIconSize(QSize(20, 20))
        bar.setToolButtonStyle(Qt.ToolButtonStyle.ToolButtonTextBesideIcon)
        shape = QToolButton()
        shape.setText("Add shape")
        shape.setIcon(icon("shape"))
        shape.setToolButtonStyle(Qt.ToolButtonStyle.ToolButtonTextBesideIcon)
        shape.setToolTip("Opens the gallery of shapes (Ctrl+B)")
        shape.clicked.connect(w.open_gallery)
        shape.setFocusPolicy(Qt.FocusPolicy.TabFocus)
        self.shape_button = shape
        bar.addWidget(shape)
        for command in (
            Command(
                "Add mesh", w.files.ask_meshes, None, "mesh",
                "Adds mesh files (STL, OBJ, PLY, OFF, 3MF, GLB); they can be dropped, too.",
            ),
            Command("Add known part", w.ask_known_part, None, "known", "Adds a bought-in part from its data sheet."),
            Command("Add group", w.add_group, None, "group", "Puts the selected lines into a new group."),
        ):
            bar.addAction(self._action(command))
        bar.addSeparator()
        bar.addAction(self.undo)
        bar.addAction(self.redo)
        stretch = QWidget()
        stretch.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)
        bar.addWidget(stretch)
        for words, field in (("Variant", self.variants), ("Drive axis", self.axes), ("Units", self.units)):
            label = Words(words, "quiet")
            label.setContentsMargins(GRID, 0, GRID // 2, 0)
            shown = [bar.addWidget(label), bar.addWidget(field)]
            if field is self.variants:
                self._variant_shown = shown
        w.addToolBar(bar)

    def show_variants(self, variants: tuple[str, ...], chosen: str) -> None:
        """Offer the variants of the document, and all lines at once; a document without any offers no choice."""
        self.variants.clear()
        for name, words in (("", "all lines"), *((name, name) for name in variants)):
            self.variants.addItem(words, name)
        self.variants.set_value(chosen)
        for action in self._variant_shown:
            action.setVisible(bool(variants))

    def redraw_icons(self) -> None:
        """Draw the icons again, in the colours of another theme."""
        for action, drawing in self.drawn.items():
            action.setIcon(icon(drawing))
        self.shape_button.setIcon(icon("shape"))
