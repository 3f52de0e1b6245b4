"""A document read: sizes bounded, the JSON held against the schema, meshes against their hash, then built."""

from __future__ import annotations

import io
from contextlib import contextmanager
from dataclasses import replace
from pathlib import Path
from typing import IO, TYPE_CHECKING, Any, TypeAlias

from core.assembly import (
    Assembly,
    Body,
    Cut,
    DataSheet,
    DriveAxis,
    Driver,
    Group,
    KnownAxial,
    KnownTensor,
    MeshBody,
    Node,
    Part,
    ShapeBody,
)
from core.assembly.assembly import DEEPEST, MeantOverlap
from core.assembly.link import Link
from core.assembly.names import NameEntry, evaluated
from core.assembly.seat import Anchor, Seat
from core.assembly.seats import check_seats, seated
from core.document.archive import Archive
from core.document.drive_data import machine_with
from core.document.layout import data_of
from core.document.link_path import path_of
from core.document.migration import MAJOR, MINOR, Data, migrated
from core.document.refusing import made_at
from core.document.validation import checked, short_place
from core.errors import DocumentError
from core.material import ByDensity, ByMaterial, NotSet, PerArea, PerLength, Weighed
from core.mesh import MeshAsset
from core.placement import Copies, Mirrored, Pose, Ring, Row, Several
from core.shapes import SHAPES, Outline, OutlinedShape, Shape

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from core.document.schema import (
        AxisEntry,
        BodyEntry,
        CopiesEntry,
        CutEntry,
        DocumentEntry,
        DriverEntry,
        MeantOverlapEntry,
        MeshEntry,
        NodeEntry,
        PoseEntry,
        SeatEntry,
        ShapeEntry,
    )
    from core.machine import Machine

# x, y, rounding and arc of each point, loop by loop.
_Loops: TypeAlias = tuple[tuple[tuple[float, float, float, float], ...], ...]

_REMEDY = "Take the last good copy, or mend the entry where it was changed by hand"
_REMEDY_NEWER = "It was written by a newer version of Masswright: open it with that one"


def read_document(path: str | Path) -> Machine:
    """Return the machine that a document file holds; nothing of it is taken if anything in it is wrong.

    Raises:
        DocumentError: the file cannot be opened, is no document, is damaged, or is of a newer version.

    """
    file_path = Path(path)
    with opened(file_path) as file:
        return read_document_file(file, file_path)


@contextmanager
def opened(path: Path) -> Iterator[io.BufferedReader]:
    """Open a document file to be read; what the system refuses then or later is told in a sentence.

    Raises:
        DocumentError: it cannot be opened or read.

    """
    try:
        with path.open("rb") as file:
            yield file
    except FileNotFoundError as error:
        raise DocumentError(
            "there is no such file", where=str(path), remedy="Look at the name and the folder"
        ) from error
    except IsADirectoryError as error:
        raise DocumentError(
            "this is a folder, not a document", where=str(path), remedy="Choose a .masswright file"
        ) from error
    except PermissionError as error:
        raise DocumentError(
            "the file may not be read", where=str(path), remedy="Ask its owner for the right to read it"
        ) from error
    except OSError as error:
        raise DocumentError(
            "the file cannot be read", where=str(path), read=error.strerror or "",
            remedy="Look at the drive it is on",
        ) from error


def read_document_bytes(data: bytes, name: str = "document") -> Machine:
    """Return the machine that a document's bytes hold; name stands for the file in an error's sentence.

    Raises:
        DocumentError: they are no document, a damaged one, or one of a newer version.

    """
    return _read(io.BytesIO(data), name, "")


def read_document_file(file: IO[bytes], path: Path) -> Machine:
    """Return what an open document file holds; linked files are told from the folder of its path.

    Raises:
        DocumentError: as `read_document_bytes`.

    """
    return _read(file, path.name, str(path.resolve().parent))


def entries_of_document(file: IO[bytes]) -> DocumentEntry:
    """Return the checked entries of an open document file, without what they describe.

    Raises:
        DocumentError: it is no document, a damaged one, or one of a newer version.

    """
    return _entries(Archive(file))


def _entries(archive: Archive) -> DocumentEntry:
    data = migrated(data_of(archive.json()))
    return checked(data, _REMEDY_NEWER if _is_newer(data) else _REMEDY)


def _read(file: IO[bytes], name: str, folder: str) -> Machine:
    try:
        archive = Archive(file)
        document = _entries(archive)
        return machine_with(_Builder(archive, folder).assembly(document), document.drive_settings)
    except DocumentError as error:
        # Everything below knows the place in the file, and only here is the file's own name known.
        where = f"{name}, {error.where}" if error.where else name
        raise DocumentError(error.what, where=where, read=error.read, remedy=error.remedy) from error


class _Builder:
    """Makes the assembly from checked entries; parts share equal meshes, shapes and outlines."""

    def __init__(self, archive: Archive, folder: str) -> None:
        self._archive = archive
        self._folder = folder
        self._assets: dict[tuple[str, str, tuple[str, ...], str], MeshAsset] = {}
        self._shapes: dict[tuple[str, tuple[tuple[str, float], ...], _Loops | None], ShapeBody] = {}
        self._outlines: dict[_Loops, Outline] = {}

    def assembly(self, document: DocumentEntry) -> Assembly:
        """Return the assembly that the checked entries describe."""
        axes = tuple(_axis(entry, f"axes[{i}] ({entry.name})") for i, entry in enumerate(document.axes))
        members = self._nodes(document.members, "", 0)
        meant = tuple(_meant(entry, f"meant[{i}]") for i, entry in enumerate(document.meant))
        more = _names_and_variants(document)
        read = made_at("", lambda: Assembly(document.name, members, axes, document.drive, meant, **more))
        made_at("", lambda: check_seats(read))
        return made_at("", lambda: seated(read))

    def _nodes(self, entries: Sequence[NodeEntry], above: str, depth: int) -> tuple[Node, ...]:
        if depth >= DEEPEST:
            what = f"groups nest at most {DEEPEST} deep"
            raise DocumentError(what, where=short_place(above.rstrip(".")), remedy=_REMEDY)
        return tuple(self._node(entry, f"{above}members[{i}]", depth) for i, entry in enumerate(entries))

    def _node(self, entry: NodeEntry, place: str, depth: int) -> Node:
        said = f"({entry.name})"
        typed = tuple((field, text) for field, text in entry.typed)
        pose = _pose(entry.pose)
        copies = made_at(f"{place}.copies {said}", lambda: _copies(entry.copies))
        if entry.kind == "group":
            members = self._nodes(entry.members, f"{place}.", depth + 1)
            only_in, seat = tuple(entry.only_in), _seat(entry.seat)
            link = None if entry.link is None else Link(path_of(self._folder, entry.link.path), entry.link.sha256)
            return Group(entry.key, entry.name, members, pose, copies, typed, entry.note, only_in, link, seat)
        driver = made_at(f"{place}.driver {said}", lambda: _driver(entry.driver))
        body = made_at(f"{place}.body {said}", lambda: self._body(entry.body))
        cuts = tuple(self._cut(cut, f"{place}.cuts[{i}] ({cut.name})") for i, cut in enumerate(entry.cuts))
        only_in, seat = tuple(entry.only_in), _seat(entry.seat)
        part = made_at(
            f"{place} {said}",
            lambda: Part(entry.key, entry.name, body, driver, pose, copies, typed, entry.note, cuts, only_in, seat),
        )
        # What cannot be cut out is refused here, where its place in the file is known; the part keeps what it cost.
        _ = made_at(f"{place}.cuts", lambda: part.cutting)
        return part

    def _cut(self, entry: CutEntry, place: str) -> Cut:
        typed = tuple((field, text) for field, text in entry.typed)
        pose = _pose(entry.pose)
        return made_at(
            place,
            lambda: Cut(
                entry.key, entry.name, self._shape(entry.shape).shape, pose, _copies(entry.copies), typed, entry.note
            ),
        )

    def _body(self, entry: BodyEntry) -> Body:
        if entry.kind == "shape":
            return self._shape(entry)
        if entry.kind == "mesh":
            return MeshBody(self._asset(entry), entry.metres_per_unit, entry.counts, entry.origin)
        if entry.kind == "known tensor":
            known = KnownTensor(entry.mass, entry.centre, entry.tensor, entry.about, entry.source)
            _ = known.own  # refuses a tensor that makes no moments
            return known
        return KnownAxial(entry.mass, entry.centre, entry.inertia_about_axis, entry.length, entry.source)

    def _shape(self, entry: ShapeEntry) -> ShapeBody:
        loops = None if entry.outline is None else tuple(tuple(loop.points) for loop in entry.outline)
        same = (entry.shape, tuple(sorted(entry.dimensions.items())), loops)
        if same not in self._shapes:
            outline = None if loops is None else self._outline(loops)
            self._shapes[same] = ShapeBody(_shape(entry, outline))
        return self._shapes[same]

    def _outline(self, loops: _Loops) -> Outline:
        if loops not in self._outlines:
            self._outlines[loops] = Outline.of(*loops)
        return self._outlines[loops]

    def _asset(self, entry: MeshEntry) -> MeshAsset:
        same = (entry.mesh, entry.name, tuple(entry.mends), entry.source)
        if same not in self._assets:
            asset = MeshAsset.of_bytes(self._archive.mesh(entry.mesh), entry.name)
            if asset.sha256 != entry.mesh:
                raise DocumentError("this mesh in the archive is packed twice", where=entry.name, remedy=_REMEDY)
            self._assets[same] = replace(asset, mends=tuple(entry.mends), source=entry.source)
        return self._assets[same]


def _meant(entry: MeantOverlapEntry, place: str) -> MeantOverlap:
    return made_at(place, lambda: MeantOverlap(entry.key_a, entry.key_b, entry.carried_by, entry.note))


def _names_and_variants(document: DocumentEntry) -> dict[str, Any]:
    entries = [NameEntry(one.name, one.text, one.note) for one in document.names]
    names = made_at("names", lambda: evaluated(entries))
    return {"names": names, "variants": tuple(document.variants), "variant": document.variant}


def _is_newer(data: Data) -> bool:
    """Return whether the same major version has been added to since this program was written."""
    minor = data["version"].get("minor")
    return data["version"]["major"] == MAJOR and isinstance(minor, int) and minor > MINOR


def _axis(entry: AxisEntry, place: str) -> DriveAxis:
    typed = tuple((field, text) for field, text in entry.typed)
    return made_at(
        place,
        lambda: DriveAxis(
            entry.name, entry.point, entry.direction, entry.second, entry.part, entry.toward, typed
        ),
    )


def _pose(entry: PoseEntry) -> Pose:
    return Pose(entry.position, entry.turns)


def _seat(entry: SeatEntry | None) -> Seat | None:
    if entry is None:
        return None
    moving, target = (Anchor(one.key, one.datum) for one in (entry.moving, entry.target))
    return Seat(moving, target, entry.facing, entry.offset, entry.aside, entry.turn)


def _copies(entry: CopiesEntry) -> Copies:
    if entry.kind == "ring":
        return Ring(entry.count, entry.point, entry.direction, entry.start, entry.span, entry.turning)
    if entry.kind == "row":
        return Row(entry.count, entry.step)
    if entry.kind == "mirrored":
        return Mirrored(entry.point, entry.normal)
    return Several(entry.count)


def _driver(entry: DriverEntry) -> Driver:
    if entry.kind == "material":
        return ByMaterial(entry.name, entry.density)
    if entry.kind == "density":
        return ByDensity(entry.density)
    if entry.kind == "per area":
        return PerArea(entry.mass_per_area)
    if entry.kind == "per length":
        return PerLength(entry.mass_per_length)
    if entry.kind == "weighed":
        return Weighed(entry.mass)
    return DataSheet() if entry.kind == "data sheet" else NotSet()


def _shape(entry: ShapeEntry, outline: Outline | None) -> Shape:
    if entry.shape not in SHAPES:
        raise DocumentError(
            "there is no such shape in this version", read=repr(entry.shape),
            remedy="Open the document with the version of Masswright that wrote it, or a newer one",
        )
    family = SHAPES[entry.shape]
    missing = [one.label for one in family.dimensions if one.name not in entry.dimensions]
    if missing:
        raise DocumentError(f"the {missing[0]} is missing", where=family.title, remedy=_REMEDY)
    if not issubclass(family, OutlinedShape):
        if outline is not None:
            raise DocumentError("this shape has no outline", where=family.title, remedy=_REMEDY)
        return family.of(entry.dimensions)
    if outline is None:
        raise DocumentError("the outline is missing", where=family.title, remedy=_REMEDY)
    return family.of(entry.dimensions, outline)
