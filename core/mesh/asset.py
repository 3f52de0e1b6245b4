"""A mesh that a document holds: the file's bytes, with what one look at them told."""

from __future__ import annotations

from dataclasses import dataclass
from hashlib import sha256
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from core.facets import Facets
from core.mesh.lighter import lighter_facets
from core.mesh.restoring import restored
from core.mesh.shells import shells_of
from core.mesh.stl import BinaryStl, corners_of_records, is_packed, stl_of_bytes, unpacked
from core.mesh.stl_faults import HEADER, reading, refuse_folder
from core.mesh.survey import MeshSurvey, gathered, survey_source
from core.mesh.weld import weld_exactly

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.mesh.curvature import Restored
    from core.progress import Progress


@dataclass(frozen=True, eq=False)
class MeshAsset:
    """An STL file as a value; two assets are equal where their bytes are.

    Attributes:
        data: the file's bytes; a gzip'ed file's are unpacked.
        name: the file's name without its folder.
        sha256: of data, hexadecimal.
        survey: of the file, in its own length unit.
    """

    data: bytes
    name: str
    sha256: str
    survey: MeshSurvey

    @classmethod
    def read(cls, path: str | Path, progress: Progress | None = None) -> MeshAsset:
        """Return the mesh in an STL file.

        Raises:
            MeshFileError: no sound STL file.
            Cancelled: progress was cancelled.
        """
        path = Path(path)
        refuse_folder(path)
        with reading(str(path)):
            data = path.read_bytes()
        return cls.of_bytes(data, path.name, progress)

    @classmethod
    def of_bytes(cls, data: bytes, name: str, progress: Progress | None = None) -> MeshAsset:
        """Return the mesh in the bytes of an STL file.

        Raises:
            MeshFileError: no sound STL file.
            Cancelled: progress was cancelled.
        """
        plain = unpacked(data, name) if is_packed(data) else bytes(data)
        survey = survey_source(stl_of_bytes(plain, name), progress)
        return cls(plain, name, sha256(plain).hexdigest(), survey)

    def __eq__(self, other: object) -> bool:
        return isinstance(other, MeshAsset) and self.sha256 == other.sha256

    def __hash__(self) -> int:
        return hash(self.sha256)

    @property
    def triangles(self) -> NDArray[np.floating]:
        """The facets' corners (n, 3, 3), file units, read-only.

        Of a binary file a float32 view of data itself, made without copying; of an ASCII file float64.
        """
        source = stl_of_bytes(self.data, self.name)
        if isinstance(source, BinaryStl):
            return corners_of_records(self.data, source.count, HEADER)
        triangles = gathered(source, self.survey.triangles)
        triangles.flags.writeable = False
        return triangles

    def count_shells(self, progress: Progress | None = None) -> int:
        """Return of how many separate surfaces the mesh consists: facets that share no vertex with one another.

        Raises:
            Cancelled: progress was cancelled.
        """
        return shells_of(stl_of_bytes(self.data, self.name), progress)

    def restored(self, progress: Progress | None = None) -> Restored | None:
        """Return the body with the curvature behind its facets restored; None where that cannot be done.

        It is computed once; file units, unit density.

        Raises:
            Cancelled: progress was cancelled.
        """
        kept: dict[str, Restored | None] = self.__dict__.setdefault("_restored", {})
        if "body" not in kept:
            kept["body"] = restored(self.triangles, self.survey, progress)
        return kept["body"]

    @property
    def restored_already(self) -> bool:
        """Whether asking for the restored body costs nothing any more."""
        return "body" in self.__dict__.get("_restored", {})

    def facets_for_view(self, most: int = 300_000) -> Facets:
        """Return the facets over shared points, in file units; of more than most, a lighter mesh of the same form.

        The lighter one takes about 0.8 s per million facets.
        """
        triangles = self.triangles
        if len(triangles) > most:
            return lighter_facets(triangles, most)
        return Facets(*weld_exactly(np.ascontiguousarray(triangles)))
