"""What can be refused, and in which words.

MasswrightError
├── ValueRefused (ValueError)         a number or option that cannot be
│   ├── QuantityError                 text that is no quantity, or one of the wrong kind
│   ├── ShapeError                    dimensions that make no body
│   └── MaterialError                 a material that is not in the table, a density that cannot be
├── FileRefused (ValueError)          a file that cannot be taken; nothing of it was
│   ├── MeshFileError                 not a mesh, or a damaged one
│   ├── OutlineFileError              a drawing without a closed outline, or a damaged one
│   └── DocumentError                 not a document, a damaged one, or one from the future
├── EditRefused (ValueError)          an edit that the assembly cannot take; it is as it was
└── Cancelled (RuntimeError)          a long task was told to stop

Every message is one line that says what is wrong, where, what was read, and what to do.
"""


class MasswrightError(Exception):
    """A refusal, with its four answers kept apart so that a window can set them as it likes.

    Args:
        what: what is wrong, as a clause without a full stop.
        where: the file, part or field, with line, byte or facet where that is known.
        read: what was found there.
        remedy: what to do about it, as a sentence without a full stop.

    >>> str(MasswrightError("the bore is wider than the plate", where="plate", read="42 mm", remedy="Make it smaller"))
    'plate: the bore is wider than the plate; read 42 mm. Make it smaller.'
    >>> str(MasswrightError("the mesh is empty"))
    'the mesh is empty.'
    """

    def __init__(self, what: str, *, where: str = "", read: str = "", remedy: str = "") -> None:
        super().__init__(what)
        self.what = what
        self.where = where
        self.read = read
        self.remedy = remedy

    def __str__(self) -> str:
        start = f"{self.where}: " if self.where else ""
        middle = f"; read {self.read}" if self.read else ""
        end = f" {self.remedy}." if self.remedy else ""
        return " ".join(f"{start}{self.what}{middle}.{end}".split())


class ValueRefused(MasswrightError, ValueError):
    """A number or option that cannot be."""


class QuantityError(ValueRefused):
    """Text that is no quantity, or a quantity of the wrong kind."""


class ShapeError(ValueRefused):
    """Dimensions that make no body."""


class MaterialError(ValueRefused):
    """A material that is not in the table, or a density that nothing has."""


class FileRefused(MasswrightError, ValueError):
    """A file that cannot be taken; nothing of it was."""


class MeshFileError(FileRefused):
    """A file that is no mesh, or a damaged one."""


class OutlineFileError(FileRefused):
    """A drawing that holds no closed outline, or a damaged one.

    Attributes:
        spots: the places that the sentence is about, (x, y) in m, to show them; empty where it is about none.
    """

    def __init__(
        self,
        what: str,
        *,
        where: str = "",
        read: str = "",
        remedy: str = "",
        spots: tuple[tuple[float, float], ...] = (),
    ) -> None:
        super().__init__(what, where=where, read=read, remedy=remedy)
        self.spots = spots


class DocumentError(FileRefused):
    """A file that is no document, a damaged one, or one from a newer version."""


class EditRefused(MasswrightError, ValueError):
    """An edit that the assembly cannot take; it is as it was."""


class Cancelled(MasswrightError, RuntimeError):
    """A long task was told to stop."""
