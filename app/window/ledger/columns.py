"""The columns of the ledger: heading, unit, what a line shows there, what is copied, and what may be typed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.quantity import Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.assembly import Line
    from core.quantity import Unit, UnitSet


@dataclass(frozen=True)
class Column:
    """One column.

    Attributes:
        key: under which its width and visibility are kept.
        heading: the first line of the heading; {axis} is the drive axis's name.
        kind: the quantity it shows, or None for text and counts.
        value: the number in SI, or the text, of a line; None where there is none.
        tip: what it means and how it is formed.
        digits: significant digits shown.
        unit: what it is shown in where that is not the unit of its kind.
        at_first: whether it is shown until somebody chooses.
        beside: the text of a line where the line alone does not say it, of what the window has of the document.

    """

    key: str
    heading: str
    kind: Kind | None
    value: Callable[[Line], float | str | int | None]
    tip: str
    digits: int = 4
    unit: Callable[[UnitSet], Unit] | None = None
    at_first: bool = True
    beside: Callable[[Session, Line], str] | None = None

    def shown_of(self, session: Session, line: Line) -> float | str | int | None:
        """Return the number in SI, or the text, of a line; None where there is none."""
        return self.value(line) if self.beside is None else self.beside(session, line)


def _centre(axis: int) -> Callable[[Line], float | None]:
    return lambda line: None if line.centre is None else float(line.centre[axis])


COLUMNS: tuple[Column, ...] = (
    Column("name", "Part", None, lambda line: line.name, "The part or group. F2 edits it; drag it to move it."),
    Column(
        "count", "×", None, lambda line: line.count,
        "How many equal copies there are in the group that holds them.\nMass and inertia are those of all copies.",
    ),
    Column(
        "material", "Material", None, lambda line: line.material,
        "What says the mass: a material, a density (7850 kg/m³) or a weighed mass (1.2 kg).\nType any of them here.",
    ),
    Column(
        "turns", "Turns with", None, lambda _line: "",
        "The shaft that it turns with where that is not the load's, and the axis where it is not the drive axis.",
        at_first=False, beside=lambda session, line: session.machine.turning_elsewhere.get(line.key, ""),
    ),
    Column("mass", "Mass", Kind.MASS, lambda line: line.mass, "Mass of all copies."),
    Column("x", "x", Kind.LENGTH, _centre(0), "Centre of mass of all copies together, from the document's origin."),
    Column("y", "y", Kind.LENGTH, _centre(1), "Centre of mass of all copies together, from the document's origin."),
    Column("z", "z", Kind.LENGTH, _centre(2), "Centre of mass of all copies together, from the document's origin."),
    Column(
        "own", "Own J", Kind.INERTIA, lambda line: line.own_inertia,
        "Inertia about each copy's own centre of mass, parallel to the drive axis, added over the copies.",
    ),
    Column(
        "transfer", "m·d²", Kind.INERTIA, lambda line: line.transfer,
        "Parallel-axis term: mass × square of the distance of each copy's centre of mass from the drive axis.",
    ),
    Column(
        "inertia", "J about {axis}", Kind.INERTIA, lambda line: line.inertia,
        "Inertia about the drive axis: own J + m·d².",
    ),
    Column(
        "gd2", "GD²", Kind.INERTIA, lambda line: line.inertia,
        "Flywheel effect about the drive axis by diameter: GD² = 4·J, as weight by diameter squared.",
        unit=lambda units: units.gd2, at_first=False,
    ),
    Column(
        "wr2", "WR²", Kind.INERTIA, lambda line: line.inertia,
        "Flywheel effect about the drive axis by radius: WR² = J, as weight in pounds by radius squared.",
        unit=lambda units: units.wr2, at_first=False,
    ),
    Column(
        "gyration", "k about {axis}", Kind.LENGTH, lambda line: line.radius_of_gyration,
        "Radius of gyration about the drive axis: √(J/m) of all copies together.", at_first=False,
    ),
    Column(
        "share", "Share of J", Kind.NUMBER, lambda line: line.share,
        "How much of the total inertia about the drive axis this line is.", 3,
    ),
)

INDEX = {column.key: at for at, column in enumerate(COLUMNS)}
