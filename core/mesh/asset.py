"""A mesh that a document holds: the file's bytes, with what one look at them told."""

from __future__ import annotations

from dataclasses import dataclass, replace
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

    from core.arrays import IntArray
    from core.mesh.census import Census
    from core.mesh.curvature import Restored
    from core.progress import Progress

# Facets that are drawn of one mesh at most; of more, a lighter mesh is made.
MOST_DRAWN = 150_000


@dataclass(frozen=True, eq=False)
class MeshAsset:
    """An STL file as a value; two assets are equal where their bytes and what was mended are.

    Attributes:
        data: the file's bytes; a gzip'ed file's are unpacked.
        name: the file's name without its folder, of one body among several with that body's own name.
        sha256: of data, hexadecimal.
        survey: of the file, in its own length unit.
        mends: what was mended since it was read, in words, one after the other.
        source: SHA-256 of the data before the first mend; "" where nothing was mended.
        metres_per_unit: the length unit that the file itself names, m; None where it names none.
    """

    data: bytes
    name: str
    sha256: str
    survey: MeshSurvey
    mends: tuple[str, ...] = ()
    source: str = ""
    metres_per_unit: float | None = None

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
        return isinstance(other, MeshAsset) and (
            (self.sha256, self.mends, self.source) == (other.sha256, other.mends, other.source)
        )

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

    def census(self, progress: Progress | None = None) -> Census:
        """Return what the mesh consists of and all that is wrong with it; seconds per million facets, taken once.

        Raises:
            Cancelled: progress was cancelled.
        """
        if "_census" not in self.__dict__:
            from core.mesh.census import census

            self.__dict__["_census"] = census(self.triangles, progress)
        return self.census_at_hand  # type: ignore[return-value]  # just taken

    @property
    def census_at_hand(self) -> Census | None:
        """The census where it was taken already; None where it was not."""
        taken: Census | None = self.__dict__.get("_census")
        return taken

    def mended(
        self, mend: str, facets: IntArray | None = None, progress: Progress | None = None
    ) -> MeshAsset:
        """Return a new asset with one mend done and listed; this one stays as it is.

        The mended mesh is held as binary STL, so that coordinates of a text file are rounded to about seven digits.

        Args:
            mend: a key of core.mesh.mend.MENDS.
            facets: (k,) those to turn, of the finding that the mend stands beside; None: all.
            progress: to be cancelled by.

        Raises:
            EditRefused: the mend has nothing to do here, or would leave something worse.
            Cancelled: progress was cancelled.
        """
        from core.mesh.mend import MENDS, without_collapsed
        from core.mesh.stl_writing import stl_of_triangles

        before = self.triangles
        after = MENDS[mend].function(before, facets, progress)
        if after.dtype != np.float32:
            # Rounded, corners of a facet may fall together; what is dropped with it takes no edge out of balance.
            after = without_collapsed(after.astype(np.float32))
        how = f"{len(facets)} of {len(before)} facets" if facets is not None and mend == "turn" else (
            f"{len(before)} facets" if len(before) == len(after) else f"{len(before)} facets became {len(after)}"
        )
        made = MeshAsset.of_bytes(stl_of_triangles(after, self.name), self.name, progress)
        return replace(
            made, mends=(*self.mends, f"{MENDS[mend].done} ({how})"), source=self.source or self.sha256,
            metres_per_unit=self.metres_per_unit,
        )

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

    @property
    def drawn_lighter(self) -> bool:
        """Whether what is drawn is a lighter mesh than what is computed with, which a reader should be told."""
        return self.survey.triangles > MOST_DRAWN

    def facets_for_view(self, most: int = MOST_DRAWN) -> Facets:
        """Return the facets over shared points, in file units; of more than most, a lighter mesh of the same form.

        The lighter one takes about half a second of processor time per million facets, and is made once.
        """
        kept: dict[int, Facets] = self.__dict__.setdefault("_for_view", {})
        if most not in kept:
            triangles = self.triangles
            heavy = len(triangles) > most
            kept[most] = (
                lighter_facets(triangles, most) if heavy else Facets(*weld_exactly(np.ascontiguousarray(triangles)))
            )
        return kept[most]
