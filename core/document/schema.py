"""The schema of assembly.json: which entries there are, of which kind, and how large they may be.

Lengths in m, angles in rad, masses in kg, inertia in kg·m², densities in kg/m³. Importing this module
imports pydantic, so that happens where a document is read or saved.
"""

from __future__ import annotations

from typing import Annotated, Literal, TypeAlias

from pydantic import Field

from core.assembly.cuts import MOST_CUT_COPIES
from core.assembly.membership import MOST_VARIANTS
from core.document.drive_schema import DriveSettingsEntry
from core.document.schema_base import (
    MOST_ENTRIES,
    Entry,
    Four,
    Name,
    Number,
    Positive,
    Six,
    Text,
    Three,
    Two,
    Typed,
)
from core.shapes.profile import MOST_LOOPS, MOST_POINTS

MOST_NODES = 200_000

OnlyIn: TypeAlias = Annotated[list[Name], Field(max_length=MOST_VARIANTS)]


class PoseEntry(Entry):
    """Where a node stands in the frame of the group that holds it."""

    position: Three
    turns: Three


class SeveralEntry(Entry):
    """So many at one place."""

    kind: Literal["several"]
    count: int


class RingEntry(Entry):
    """Copies on a pitch circle."""

    kind: Literal["ring"]
    count: int
    point: Three
    direction: Three
    start: Number
    span: Number
    turning: bool


class RowEntry(Entry):
    """Copies in a straight row."""

    kind: Literal["row"]
    count: int
    step: Three


class MirroredEntry(Entry):
    """A body and its mirror image."""

    kind: Literal["mirrored"]
    point: Three
    normal: Three


CopiesEntry: TypeAlias = Annotated[
    SeveralEntry | RingEntry | RowEntry | MirroredEntry, Field(discriminator="kind")
]


class MaterialEntry(Entry):
    """A material by name, with the density that it had when it was chosen."""

    kind: Literal["material"]
    name: Name
    density: Number


class DensityEntry(Entry):
    """A density that was typed."""

    kind: Literal["density"]
    density: Number


class PerAreaEntry(Entry):
    """The mass per area of a body without thickness, kg/m²."""

    kind: Literal["per area"]
    mass_per_area: Number


class PerLengthEntry(Entry):
    """The mass per length of a rod or ring, kg/m."""

    kind: Literal["per length"]
    mass_per_length: Number


class WeighedEntry(Entry):
    """The mass of one copy, weighed."""

    kind: Literal["weighed"]
    mass: Number


class NotSetEntry(Entry):
    """Nothing says what it weighs."""

    kind: Literal["not set"]


class DataSheetEntry(Entry):
    """The data sheet says it, with the inertia."""

    kind: Literal["data sheet"]


DriverEntry: TypeAlias = Annotated[
    MaterialEntry | DensityEntry | PerAreaEntry | PerLengthEntry | WeighedEntry | NotSetEntry | DataSheetEntry,
    Field(discriminator="kind"),
]


class LoopEntry(Entry):
    """One loop of an outline: x, y, corner rounding and radius of the arc to the next point, of each point."""

    points: Annotated[list[Four], Field(max_length=MOST_POINTS)]


class ShapeEntry(Entry):
    """A body from dimensions, some from an outline too; which there are, core.shapes.SHAPES says."""

    kind: Literal["shape"]
    shape: Name
    dimensions: Annotated[dict[Name, Number], Field(max_length=MOST_ENTRIES)]
    outline: Annotated[list[LoopEntry], Field(max_length=MOST_LOOPS)] | None = None


class MeshEntry(Entry):
    """A body from a mesh file, which lies in the archive under its SHA-256."""

    kind: Literal["mesh"]
    mesh: Annotated[str, Field(pattern=r"^[0-9a-f]{64}$")]
    name: Name
    metres_per_unit: Positive
    counts: Literal["faceted", "restored"] = "faceted"
    origin: Text = ""
    mends: Annotated[list[Name], Field(max_length=MOST_ENTRIES)] = Field(default_factory=list)
    source: Annotated[str, Field(pattern=r"^([0-9a-f]{64})?$")] = ""


class KnownTensorEntry(Entry):
    """A bought-in part with its full tensor."""

    kind: Literal["known tensor"]
    mass: Number
    centre: Three
    tensor: Six
    about: Literal["centre", "origin"]
    source: Text


class KnownAxialEntry(Entry):
    """A bought-in part with the inertia about its own axis."""

    kind: Literal["known axial"]
    mass: Number
    centre: Three
    inertia_about_axis: Number
    length: Number
    source: Text


BodyEntry: TypeAlias = Annotated[
    ShapeEntry | MeshEntry | KnownTensorEntry | KnownAxialEntry, Field(discriminator="kind")
]


class CutEntry(Entry):
    """A solid that is taken out of a part; it stands in the part's frame."""

    key: Name
    name: Name
    note: Text
    typed: Typed
    pose: PoseEntry
    copies: CopiesEntry
    shape: ShapeEntry


class NamedEntry(Entry):
    """A named dimension: its value follows from its text."""

    name: Name
    text: Text
    note: Text


class AnchorEntry(Entry):
    """A named place of a line, or an axis of the document where the key is ""."""

    key: Name
    datum: Name


class SeatEntry(Entry):
    """What holds a line at a place of another one; its pose follows from it."""

    moving: AnchorEntry
    target: AnchorEntry
    facing: Literal["against", "along"]
    offset: Number
    aside: Two
    turn: Number


class PartEntry(Entry):
    """One line of the parts list."""

    kind: Literal["part"]
    key: Name
    name: Name
    note: Text
    typed: Typed
    pose: PoseEntry
    copies: CopiesEntry
    body: BodyEntry
    driver: DriverEntry
    cuts: Annotated[list[CutEntry], Field(max_length=MOST_CUT_COPIES)] = Field(default_factory=list)
    only_in: OnlyIn = Field(default_factory=list)
    seat: SeatEntry | None = None


class LinkEntry(Entry):
    """The document that a linked group was read from: relative to this document's folder, or absolute."""

    path: Text
    sha256: Annotated[str, Field(pattern=r"^[0-9a-f]{64}$")]


class GroupEntry(Entry):
    """Lines that move as one."""

    kind: Literal["group"]
    key: Name
    name: Name
    note: Text
    typed: Typed
    pose: PoseEntry
    copies: CopiesEntry
    members: Annotated[list[NodeEntry], Field(max_length=MOST_NODES)]
    only_in: OnlyIn = Field(default_factory=list)
    link: LinkEntry | None = None
    seat: SeatEntry | None = None


NodeEntry: TypeAlias = Annotated[PartEntry | GroupEntry, Field(discriminator="kind")]


class AxisEntry(Entry):
    """An axis that something turns about; a second point says its direction, a part (by its key) both."""

    name: Name
    point: Three
    direction: Three
    second: Three | None = None
    part: Name = ""
    toward: Three = (0.0, 0.0, 1.0)
    typed: Typed = Field(default_factory=list)


class MeantOverlapEntry(Entry):
    """A mark that two parts penetrate each other on purpose."""

    key_a: Name
    key_b: Name
    carried_by: Name
    note: Text


class VersionEntry(Entry):
    """Of the schema: a new minor version only adds entries, a new major version changes what entries mean."""

    major: int
    minor: Annotated[int, Field(ge=0)]


class DocumentEntry(Entry):
    """All of assembly.json."""

    version: VersionEntry
    name: Name
    drive: Name
    axes: Annotated[list[AxisEntry], Field(min_length=1, max_length=MOST_ENTRIES)]
    members: Annotated[list[NodeEntry], Field(max_length=MOST_NODES)]
    names: Annotated[list[NamedEntry], Field(max_length=MOST_ENTRIES)] = Field(default_factory=list)
    variants: Annotated[list[Name], Field(max_length=MOST_VARIANTS)] = Field(default_factory=list)
    variant: Name = ""
    meant: Annotated[list[MeantOverlapEntry], Field(max_length=MOST_NODES)] = Field(default_factory=list)
    drive_settings: DriveSettingsEntry | None = None


GroupEntry.model_rebuild()
DocumentEntry.model_rebuild()
