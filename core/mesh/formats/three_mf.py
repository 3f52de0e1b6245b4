"""3MF core specification 1.3: a ZIP archive with a model in XML, which names its unit.

Objects are meshes or lists of components; the build list says which stand where. Of extensions, objects in further
model parts of the same archive are followed, materials are passed over; a file that requires another one is refused.
"""

from __future__ import annotations

import io
import posixpath
import zipfile
import zlib
from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING
from xml.parsers import expat

import numpy as np

from core.mesh.formats.bodies import (
    DEEPEST,
    MOST_BODIES,
    MOST_BYTES,
    RawBody,
    RawFile,
    checked_body,
    fault,
    numbers,
    refuse_count,
    refuse_empty,
    shown,
)
from core.mesh.stl_faults import COARSER

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.progress import Progress

UNITS = {
    "micron": 1e-6, "millimeter": 1e-3, "centimeter": 1e-2, "inch": 0.0254, "foot": 0.3048, "meter": 1.0,
}
_MODEL_KIND = "3dmodel"
_RELATIONS = "_rels/.rels"
_USUAL_MODEL = "3D/3dmodel.model"
# Extensions that change nothing about where material is; by the middle of their namespace.
_KNOWN_EXTENSIONS = ("/production/", "/material/", "/core/")
# XML packs by 5 to 30; tighter than this, a file that is not small is a trap.
_TIGHTEST, _TIGHT_MATTERS_FROM = 400, 2**20
_BLOCK = 1 << 20
_TRANSFORM = 12


@dataclass
class _Component:
    path: str
    key: str
    transform: str
    line: int


@dataclass
class _Object:
    name: str
    vertices: list[str] = field(default_factory=list)
    triangles: list[str] = field(default_factory=list)
    components: list[_Component] = field(default_factory=list)
    body: RawBody | None = None


class _Model:
    """One model part of the archive, parsed."""

    def __init__(self, path: str, name: str) -> None:
        self.unit = "millimeter"
        self.objects: dict[str, _Object] = {}
        self.items: list[_Component] = []
        self._path, self._name = path, name
        self._current: _Object | None = None
        self._spaces: dict[str, str] = {}
        self._parser = expat.ParserCreate(namespace_separator=" ")
        self._parser.StartElementHandler = self._start
        self._parser.EndElementHandler = self._end
        self._parser.StartDoctypeDeclHandler = self._doctype
        self._parser.StartNamespaceDeclHandler = self._namespace

    def parse(self, data: bytes, progress: Progress | None) -> None:
        """Take in the XML."""
        try:
            for start in range(0, len(data), _BLOCK):
                self._parser.Parse(data[start : start + _BLOCK], start + _BLOCK >= len(data))
                if progress is not None:
                    progress.advance(0)
        except expat.ExpatError as error:
            where = f"{self._name}, {self._path}, line {error.lineno}"
            raise fault("the XML of the model is damaged", where, expat.ErrorString(error.code)) from error
        except LookupError as error:
            where = f"{self._name}, {self._path}"
            raise fault("the XML of the model is in an encoding that nobody knows", where, str(error)) from error
        for key, made in self.objects.items():
            if made.vertices or made.triangles:
                made.body = self._body(key, made)

    def place(self, line: int) -> str:
        """Return where in the file a line is."""
        return f"{self._name}, {self._path}, line {line}"

    def _doctype(self, *_: object) -> None:
        raise fault("a document type is declared, which no 3MF file needs", self._here())

    def _namespace(self, prefix: str | None, uri: str) -> None:
        self._spaces[prefix or ""] = uri

    def _here(self) -> str:
        return self.place(self._parser.CurrentLineNumber)

    def _start(self, tag: str, attributes: dict[str, str]) -> None:
        kind = tag.rpartition(" ")[2]
        if kind == "vertex" and self._current is not None:
            self._current.vertices += [self._needed(attributes, axis, kind) for axis in "xyz"]
        elif kind == "triangle" and self._current is not None:
            self._current.triangles += [self._needed(attributes, corner, kind) for corner in ("v1", "v2", "v3")]
        elif kind == "object":
            self._current = _Object(attributes.get("name", ""))
            self.objects[self._needed(attributes, "id", kind)] = self._current
        elif kind in ("component", "item"):
            path = next((value for key, value in attributes.items() if key.rpartition(" ")[2] == "path"), self._path)
            target = _Component(path.lstrip("/"), self._needed(attributes, "objectid", kind),
                                attributes.get("transform", ""), self._parser.CurrentLineNumber)
            if kind == "item":
                self.items.append(target)
            elif self._current is not None:
                self._current.components.append(target)
        elif kind == "model":
            self.unit = attributes.get("unit", "millimeter")
            self._refuse_extensions(attributes.get("requiredextensions", ""))

    def _end(self, tag: str) -> None:
        if tag.rpartition(" ")[2] == "object":
            self._current = None

    def _needed(self, attributes: dict[str, str], key: str, kind: str) -> str:
        if key not in attributes:
            raise fault(f'"{key}" is missing in a {kind}', self._here(), shown(" ".join(attributes)))
        return attributes[key]

    def _refuse_extensions(self, required: str) -> None:
        for prefix in required.split():
            space = self._spaces.get(prefix, prefix)
            if not any(known in space for known in _KNOWN_EXTENSIONS):
                raise fault(
                    "the file requires an extension that is not read", self._here(), shown(space),
                    "Export the part as plain facets",
                )

    def _body(self, key: str, made: _Object) -> RawBody:
        where = f"{self._name}, {self._path}, object {key}"
        points = np.array(numbers(made.vertices, where)).reshape(-1, 3)
        try:
            corners = np.array(list(map(int, made.triangles)), np.int64).reshape(-1, 3)
        except (ValueError, OverflowError) as error:
            raise fault("a corner of a triangle is no vertex number", where) from error
        made.vertices, made.triangles = [], []
        return checked_body(made.name, points, corners, where)


class _Package:
    """The archive, and the model parts of it that were needed so far."""

    def __init__(self, data: bytes, name: str, progress: Progress | None) -> None:
        self._name, self._progress = name, progress
        try:
            self._zip = zipfile.ZipFile(io.BytesIO(data))
        except (zipfile.BadZipFile, NotImplementedError, ValueError, OverflowError) as error:
            raise fault("the file is no ZIP archive, or it is cut short", name, shown(data[:4])) from error
        self._models: dict[str, _Model] = {}
        self._names = {entry.lower(): entry for entry in self._zip.namelist()}

    def start(self) -> str:
        """Return the path of the model that the archive names as its own."""
        if _RELATIONS in self._names:
            found: list[str] = []

            def start(tag: str, attributes: dict[str, str]) -> None:
                if tag.rpartition(" ")[2] == "Relationship" and attributes.get("Type", "").endswith(_MODEL_KIND):
                    found.append(attributes.get("Target", ""))

            parser = expat.ParserCreate(namespace_separator=" ")
            parser.StartElementHandler = start
            try:
                parser.Parse(self._bytes(_RELATIONS), True)
            except (expat.ExpatError, LookupError) as error:
                raise fault("the XML of the archive's list is damaged", f"{self._name}, {_RELATIONS}") from error
            if found:
                return posixpath.normpath(found[0].lstrip("/"))
        return _USUAL_MODEL

    def model(self, path: str) -> _Model:
        """Return a model part."""
        if path not in self._models:
            made = _Model(path, self._name)
            made.parse(self._bytes(path), self._progress)
            self._models[path] = made
        return self._models[path]

    def _bytes(self, path: str) -> bytes:
        entry = self._names.get(path.lower())
        where = f"{self._name}, {path}"
        if entry is None:
            raise fault("the archive holds no such model", where, f"{len(self._names)} other files")
        info = self._zip.getinfo(entry)
        if info.file_size > MOST_BYTES:
            what = f"models of more than {MOST_BYTES} bytes are not taken"
            raise fault(what, where, f"{info.file_size} bytes", f"{COARSER}, or export it as STL")
        if info.file_size > _TIGHT_MATTERS_FROM and info.file_size > _TIGHTEST * info.compress_size:
            read = f"{info.file_size} bytes in {info.compress_size}"
            raise fault("the model is packed tighter than any real one", where, read)
        try:
            return self._zip.read(info)
        except (zipfile.BadZipFile, zlib.error, EOFError, NotImplementedError, RuntimeError, ValueError) as error:
            raise fault("the model in the archive is damaged, cut short or encrypted", where) from error


def read_3mf(data: bytes, name: str, progress: Progress | None = None) -> RawFile:
    """Return the bodies that a 3MF file builds, each where it stands, in the unit that the file names.

    Raises:
        MeshFileError: no 3MF file, a damaged one, or one that needs what is not read.
        Cancelled: progress was cancelled.
    """
    package = _Package(data, name, progress)
    root = package.model(package.start())
    if root.unit not in UNITS:
        raise fault("the unit is none that a 3MF file can have", name, shown(root.unit), f"One of {', '.join(UNITS)}")
    build = _Build(package)
    for item in root.items:
        build.gather(root, item, (np.eye(3), np.zeros(3)), "", 0)
    refuse_empty(build.bodies, name, f"{len(root.objects)} objects, of which {len(root.items)} are to be built")
    return RawFile(tuple(build.bodies), UNITS[root.unit])


class _Build:
    """The bodies gathered so far; components multiply, so what they come to is counted on the way."""

    def __init__(self, package: _Package) -> None:
        self.bodies: list[RawBody] = []
        self._package = package
        self._facets = 0
        self._visits = 0

    def gather(
        self, model: _Model, target: _Component, frame: tuple[FloatArray, FloatArray], called: str, depth: int
    ) -> None:
        """Add the bodies of an object, and of what it is made of, as they stand in the build."""
        where = model.place(target.line)
        self._visits += 1
        if depth >= DEEPEST or self._visits > MOST_BODIES:
            what = f"components nest more than {DEEPEST} deep, or there are more than {MOST_BODIES}"
            raise fault(what, where, remedy="Export fewer of them")
        home = self._package.model(target.path)
        if target.key not in home.objects:
            raise fault("an object is named that is not there", where, shown(target.key))
        made = home.objects[target.key]
        called = made.name or called
        own_linear, own_shift = _transform(target.transform, where)
        with np.errstate(over="ignore", invalid="ignore"):
            linear, shift = frame[0] @ own_linear, frame[0] @ own_shift + frame[1]
        if made.body is not None and len(made.body.corners):
            self._facets += len(made.body.corners)
            refuse_count(self._facets, where)
            self.bodies.append(replace(made.body.moved(linear, shift), name=called))
        for component in made.components:
            self.gather(home, component, (linear, shift), called, depth + 1)


def _transform(text: str, where: str) -> tuple[FloatArray, FloatArray]:
    """Return linear (3, 3) and shift (3,) of a transform, which is written for rows: r' = r·M."""
    if not text.strip():
        return np.eye(3), np.zeros(3)
    words = text.split()
    values = np.array(numbers(words, where))
    if len(values) != _TRANSFORM or not np.isfinite(values).all():
        raise fault("a transform needs twelve finite numbers", where, shown(text))
    matrix = values.reshape(4, 3)
    return matrix[:3].T, matrix[3]

