"""Fields of one entry of the drive's lists: its name, its choices, its numbers."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Any

from app.window.fields import ChoiceField, Form, TextField
from app.window.pages.drive_section import DriveSection, shafts_of
from core.drive.items import items_at, with_item_at

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session

Choices = list[tuple[str, object]]


class EntrySection(DriveSection):
    """Fields of one entry; `aim` turns them to another of the same kind.

    Attributes:
        told: called with the sentence that refuses a choice or a name; with "" when one was taken.
    """

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.told: Callable[[str], None] = session.refused.emit
        self._texts: list[TextField] = []
        self._choices: list[tuple[ChoiceField, Callable[[], object]]] = []

    @property
    def holder(self) -> str:
        """The path of the list that the entry is in."""
        return self.root.rpartition(".")[0]

    @property
    def index(self) -> int:
        """The entry's place in its list."""
        return int(self.root.rpartition(".")[2])

    @property
    def item(self) -> Any:
        """The entry as it is now."""
        return items_at(self.session.drive, self.holder)[self.index]

    def aim(self, root: str, name: str) -> None:
        """Turn the fields to another entry of the same kind; what is being typed for the old one is dropped."""
        if root != self.root:
            self.drop()
        self.root, self.name = root, name

    def show(self) -> None:
        """Show the entry as it is now."""
        super().show()
        for text in self._texts:
            text.set_value(self.item.name)
        for choice, value in self._choices:
            choice.set_value(value())

    def change(self, words: str, change: Callable[[Any], object]) -> bool:
        """Exchange the entry for another one under words for undo; tell what refuses it, and return if it was taken."""
        holder, index = self.holder, self.index
        refusal = self.attempt(
            words, lambda settings: with_item_at(settings, holder, index, change(items_at(settings, holder)[index]))
        )
        self.told(refusal)
        return not refusal

    # Fields

    def name_field(self, tip: str = "") -> TextField:
        """Add the field for the entry's name."""
        field = TextField("Name")
        self.form.add("name", field, tip)
        field.entered.connect(lambda text: self._rename(field, text.strip()))
        self._texts.append(field)
        return field

    def choice(self, label: str, attribute: str, choices: Choices, tip: str = "") -> ChoiceField:
        """Add a choice for something of the entry."""
        return self.choose(
            label, choices, lambda: getattr(self.item, attribute),
            lambda item, value: replace(item, **{attribute: value}), tip,
        )

    def choose(
        self, label: str, choices: Choices, value: Callable[[], object], put: Callable[[Any, Any], object],
        tip: str = "",
    ) -> ChoiceField:
        """Add a choice: value says what is chosen now, put gives the entry with another one chosen."""
        field = ChoiceField(label, choices)
        self.form.add(label, field, tip)

        def chosen(wanted: object) -> None:
            words = f"{self.titled(label)}: {field.currentText()}"
            if wanted != value() and not self.change(words, lambda item: put(item, wanted)):
                field.set_value(value())

        field.chosen.connect(chosen)
        self._choices.append((field, value))
        return field

    def shaft_choice(self, tip: str = "The shaft that it is on.") -> ChoiceField:
        """Add the choice of the shaft that the entry is on."""
        return self.choose(
            "shaft", shafts_of(self.session), lambda: self.session.drive.train.first_name(self.item.shaft),
            lambda item, shaft: replace(item, shaft=shaft), tip,
        )

    def _rename(self, field: TextField, name: str) -> None:
        if not name:
            field.set_value(self.item.name)
        elif name != self.item.name:
            self.change(f"Rename {self.item.name} to {name}", lambda item: replace(item, name=name))
