"""The outline of a profile on the Part page and in the gallery: table and canvas side by side, refused in place."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING, Literal

from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QFileDialog, QHBoxLayout, QPushButton, QWidget

from app.window.fields import ChoiceField, Form
from app.window.outline.canvas import OutlineCanvas
from app.window.outline.draft import (
    Loops,
    Place,
    fault_places,
    name_of_point,
    outline_of,
    places_with,
    places_without,
    with_hole,
    with_point,
    with_point_behind,
    without_point,
)
from app.window.outline.table import OutlineTable
from app.window.pages.section import Section
from app.window.style import GRID
from core.assembly import Cut, Part, ShapeBody
from core.assembly.fields import typed_for, with_typed
from core.assembly.outline_numbers import FIELDS, outline_path, with_places_moved
from core.errors import EditRefused, MasswrightError, QuantityError
from core.quantity import UNITS, Kind, compact, names_in, parse
from core.shapes import Outline, OutlinedShape
from core.shapes.profile import outline_of_text, text_of_outline

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.assembly.fields import AnyLine
    from core.quantity import Unit
    from core.shapes import Shape

Mark = Literal[".", ","]
# Steps of the grid that are offered, in mm, beside one that suits the outline.
GRID_STEPS = (0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 50.0)
FILE_UNITS = ("mm", "cm", "m", "in", "ft")


class OutlineSection(Section):
    """Edits an outline point by point; what bounds no area stays to be mended, and the old outline counts.

    Attributes:
        refusal: why what is shown is not the outline that counts; "" when it is.
        tried: told of the shape that a point being dragged would make.
    """

    def __init__(self, session: Session, form: Form, part: Part | Cut) -> None:
        super().__init__(session, form, part.key)
        shape = outlined(part)
        self.tried: Callable[[Shape | None, str], None] = lambda _shape, _refusal: None
        self.refusal = ""
        self._kept = shape.outline
        self._loops: Loops = shape.outline.loops
        self._text = ""
        form.heading("Outline")
        self.table = OutlineTable(shape.outline_axes)
        self.canvas = OutlineCanvas()
        self.canvas.shows_axis = shape.key == "turned profile"
        both = QWidget()
        layout = QHBoxLayout(both)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID)
        layout.addWidget(self.table, 3)
        layout.addWidget(self.canvas, 2)
        form.add_row(both)
        form.add_row(self._buttons())
        self._wrong = form.say("", "failed")
        self._mend = self._row({"Back to the outline that counts": self._restore})
        self._marks = self._row(
            {'"." is the decimal mark': lambda: self._paste("."), '"," is the decimal mark': lambda: self._paste(",")}
        )
        for row in (self._mend, self._marks):
            form.add_row(row)
            form.show_row(row, wanted=False)
        form.show_row(self._wrong, wanted=False)
        self._connect()

    def _connect(self) -> None:
        table, canvas = self.table, self.canvas
        table.typed.connect(self._type)
        table.pasted.connect(self._paste_text)
        table.copying.connect(self._copy)
        for side in (table, canvas):
            side.removed.connect(self._remove)
        table.inserted.connect(lambda place: self._split(place, None))
        canvas.split.connect(self._split)
        canvas.moved.connect(self._move)
        canvas.dragged.connect(self._drag)
        table.chosen.connect(self._choose)
        canvas.chosen.connect(table.choose)

    def _buttons(self) -> QWidget:
        buttons: dict[str, Callable[[], None]] = {
            "Insert point": lambda: self._split(self.table.current or (0, 0), None),
            "Delete point": lambda: self._remove(self.table.current or (0, 0)),
            "Add hole": self._add_hole,
            "Paste": lambda: self._paste_text(QGuiApplication.clipboard().text()),
            "Import…": self._ask_file,
        }
        steps: list[tuple[str, object]] = [("grid: fitting", 0.0)]
        steps += [(f"grid: {step:g} mm", step / 1e3) for step in GRID_STEPS]
        self._grid = ChoiceField("Step of the grid", steps)
        self._grid.setToolTip("Points snap to this grid while they are dragged; with Shift they move freely.")
        self._grid.chosen.connect(self._choose_grid)
        return self._row(buttons, self._grid)

    def _row(self, buttons: dict[str, Callable[[], None]], *behind: QWidget) -> QWidget:
        row = QWidget()
        layout = QHBoxLayout(row)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID // 2)
        for words, call in buttons.items():
            button = QPushButton(words)
            button.setStyleSheet("padding: 2px 8px;")
            button.clicked.connect(lambda _checked=False, call=call: call())
            layout.addWidget(button)
        layout.addStretch(1)
        for widget in behind:
            layout.addWidget(widget)
        return row

    # What is shown

    @property
    def _unit(self) -> Unit:
        return self.session.units[Kind.LENGTH]

    def show(self, node: AnyLine) -> None:
        """Show the outline that counts, unless one that is refused is being mended."""
        outline = outlined(node).outline
        if outline is not self._kept or not self.refusal:
            self._kept, self._loops = outline, outline.loops
            self._refuse(None)
        self._show()

    def _show(self) -> None:
        line = self.session.assembly.line(self.key)
        self.table.show_loops(
            self._loops, self._unit, self.session.decimal_mark,
            lambda place, column: typed_for(line, outline_path(*place, column)),
        )
        self.canvas.show_loops(self._loops)

    def _choose(self, place: Place) -> None:
        self.canvas.current = place
        self.canvas.update()

    def _choose_grid(self, step: object) -> None:
        self.canvas.step = step if isinstance(step, float) else 0.0
        self.canvas.update()

    def _refuse(self, error: MasswrightError | None, *, ask_mark: bool = False) -> None:
        """Say in place why what is shown is no outline, and mark where; None says that it is one."""
        self.refusal = str(error) if error is not None else ""
        self.canvas.faults = fault_places(error) if error is not None else ()
        self.canvas.update()
        self._wrong.setText(self.refusal)
        self.form.show_row(self._wrong, wanted=bool(self.refusal))
        self.form.show_row(self._mend, wanted=bool(self.refusal))
        self.form.show_row(self._marks, wanted=ask_mark)

    def _restore(self) -> None:
        self._loops = self._kept.loops
        self._refuse(None)
        self._show()

    # Edits

    def _take(
        self, loops: Loops, words: str, and_then: Callable[[AnyLine], AnyLine] = lambda line: line
    ) -> None:
        """Show loops, and make them the outline under a name for undo; where they are none, say why.

        and_then does to the line what goes with that.
        """
        self._loops = loops
        try:
            self._take_outline(outline_of(loops), words, and_then)
        except MasswrightError as error:
            self._refuse(error)
        self._show()

    def _take_outline(
        self, outline: Outline, words: str, and_then: Callable[[AnyLine], AnyLine] = lambda line: line
    ) -> None:
        line = self.session.assembly.line(self.key)
        shape = outlined(line).with_outline(outline)
        self._kept, self._loops = outline, outline.loops
        self._refuse(None)
        self.edit(f"{words} of {line.name}", lambda line: and_then(_with_shape(line, shape)))

    def _type(self, place: Place, column: int, text: str) -> None:
        point, names = self._loops[place[0]][place[1]], self.session.names
        where = f"{name_of_point(place)}, {FIELDS[column]}"
        try:
            value = parse(text, Kind.LENGTH, self._unit, where=where, names=names).value
        except MasswrightError as error:
            self._refuse(error)
            self._show()
            return
        # A text without names says no more than its number; the table shows that.
        kept = text.strip() if names_in(text, names) else ""
        if value != point[column] or kept:
            changed, path = point._replace(**{FIELDS[column]: value}), outline_path(*place, column)
            self._take(
                with_point(self._loops, place, changed), f"{FIELDS[column]} of {name_of_point(place)}",
                lambda line: with_typed(line, path, kept),
            )

    def _move(self, place: Place, spot: tuple[float, float]) -> None:
        point = self._loops[place[0]][place[1]]
        moved = with_point(self._loops, place, point._replace(x=spot[0], y=spot[1]))
        if moved != self._kept.loops:
            self._take(moved, f"{name_of_point(place)} to {self._said(spot)}")
        else:
            self._restore()

    def _drag(self, place: Place, spot: tuple[float, float]) -> None:
        """Show a point on its way; what it would make is tried, and nothing is kept."""
        point = self._loops[place[0]][place[1]]
        self._loops = with_point(self._loops, place, point._replace(x=spot[0], y=spot[1]))
        try:
            shape = outlined(self.session.assembly.line(self.key)).with_outline(outline_of(self._loops))
        except MasswrightError as error:
            self.canvas.faults = fault_places(error)
        else:
            self.canvas.faults = ()
            self.tried(shape, "")
        self._show()

    def _split(self, place: Place, spot: tuple[float, float] | None) -> None:
        behind = (place[0], place[1] + 1)
        self._take(
            with_point_behind(self._loops, place, spot), f"New {name_of_point(behind)}",
            lambda line: with_places_moved(line, places_with(behind)),
        )
        self.table.choose(behind)
        self._choose(behind)

    def _remove(self, place: Place) -> None:
        loops = without_point(self._loops, place)
        moved = places_without(place, whole_loop=len(loops) < len(self._loops))
        if loops != self._loops:
            self._take(loops, f"Delete {name_of_point(place)}", lambda line: with_places_moved(line, moved))

    def _add_hole(self) -> None:
        loops = with_hole(self._loops)
        self._take(loops, f"New hole {len(loops) - 1}")
        self.table.choose((len(loops) - 1, 0))

    # The clipboard and files

    def _copy(self) -> None:
        mark: Mark = "," if self.session.decimal_mark == "," else "."
        QGuiApplication.clipboard().setText(text_of_outline(self._kept, self._unit, mark))
        self.session.said.emit(f"Copied {sum(map(len, self._kept.loops))} points in {self._unit.symbol}")

    def _paste_text(self, text: str) -> None:
        self._text = text
        self._paste(None)

    def _paste(self, mark: Mark | None) -> None:
        """Take the pasted table; where its decimal mark cannot be told, ask for it in place."""
        try:
            outline = outline_of_text(self._text, self._unit, mark)
            self._take_outline(outline, "Paste outline")
        except QuantityError as error:
            self._refuse(error, ask_mark=mark is None and self._reads_both_ways())
        except MasswrightError as error:
            self._refuse(error)
        self._show()

    def _reads_both_ways(self) -> bool:
        """Tell whether naming a decimal mark would help: with it the block can be read."""
        for mark in (".", ","):
            try:
                outline_of_text(self._text, self._unit, mark)
            except QuantityError:
                continue
            except MasswrightError:
                return True
            return True
        return False

    def _ask_file(self) -> None:
        dialog = QFileDialog(self.table, "Import an outline", "", "Drawings (*.dxf *.svg)")
        dialog.setFileMode(QFileDialog.FileMode.ExistingFile)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.fileSelected.connect(self.ask_unit)
        dialog.open()

    def ask_unit(self, path: str) -> None:
        """Ask for the unit of a drawing's numbers, then take its outline."""
        from app.window.outline.unit_dialog import UnitDialog

        dialog = UnitDialog(Path(path).name, FILE_UNITS, self.table)
        dialog.unit_chosen.connect(lambda unit: self.import_file(Path(path), UNITS[unit]))
        dialog.open()

    def import_file(self, path: Path, unit: Unit) -> None:
        """Take the outline that a drawing holds; where there is none, say why."""
        from core.shapes.profile.drawing import read_outline

        try:
            self._take_outline(read_outline(path, unit), f"Import {path.name} as outline")
        except MasswrightError as error:
            self._refuse(error)
        self._show()

    def _said(self, spot: tuple[float, float]) -> str:
        x, y = (
            compact(self._unit.from_si(value), 6, decimal_mark=self.session.decimal_mark) for value in spot
        )
        return f"{x} | {y} {self._unit.symbol}"


def is_profile(line: AnyLine) -> bool:
    """Tell whether a part or a cut is made from an outline."""
    return isinstance(_shape_of(line), OutlinedShape)


def outlined(line: AnyLine) -> OutlinedShape:
    """Return the profile of a part or a cut.

    Raises:
        EditRefused: it is none.

    """
    shape = _shape_of(line)
    if isinstance(shape, OutlinedShape):
        return shape
    raise EditRefused("this line is no profile", where=line.name)


def _shape_of(line: AnyLine) -> Shape | None:
    if isinstance(line, Cut):
        return line.shape
    return line.body.shape if isinstance(line, Part) and isinstance(line.body, ShapeBody) else None


def _with_shape(line: AnyLine, shape: Shape) -> AnyLine:
    if isinstance(line, Cut):
        return replace(line, shape=shape)
    return replace(line, body=ShapeBody(shape)) if isinstance(line, Part) else line
