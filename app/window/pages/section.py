"""One block of fields on the Part page, and the one way in which its fields become edits."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from core.assembly.fields import AnyLine, with_typed, with_value

if TYPE_CHECKING:
    from app.window.fields import Form, QuantityField
    from app.window.session import Session
    from core.assembly import Assembly

# A change to one line: the line as it is in, the line as it is to be out.
Change = Callable[[AnyLine], AnyLine]


class Section:
    """Fields for some aspect of a line; `show` puts a line's values into them."""

    def __init__(self, session: Session, form: Form, key: str) -> None:
        self.session = session
        self.form = form
        self.key = key

    def show(self, node: AnyLine) -> None:
        """Show the values of the line as it is now."""
        raise NotImplementedError

    def attempt(self, name: str, change: Change) -> str:
        """Try an edit of the line; return "" or the sentence that refuses it."""

        def on_assembly(assembly: Assembly) -> Assembly:
            return assembly.with_line(change(assembly.line(self.key)))

        return self.session.attempt(name, on_assembly)

    def edit(self, name: str, change: Change) -> None:
        """Do an edit of the line; a refusal is told at the top of the window."""
        refusal = self.attempt(name, change)
        if refusal:
            self.session.refused.emit(refusal)
            self.show(self.session.assembly.line(self.key))

    def bind(self, field: QuantityField, words: str, path: str) -> None:
        """Let a field edit the number under a path of the line; the text as typed is kept there, too."""

        def entered(value: float, text: str) -> None:
            name = self.session.assembly.line(self.key).name
            shown = field.line.text().strip()
            refusal = self.attempt(
                f"{words} of {name}: {shown}", lambda node: with_typed(with_value(node, path, value), path, text)
            )
            if refusal:
                field.turn_down(refusal)

        field.entered.connect(entered)
