"""One mesh file, read and weighed: what its sheet and its answer are made of."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING, Final, Protocol

import numpy as np

from core.checks import Check, check_body
from core.handover.lines import AxisLine, Subject
from core.mesh.mesh_check import check_mesh

if TYPE_CHECKING:
    from pathlib import Path

    from core.arrays import FloatArray
    from core.mesh import MeshSurvey
    from core.mesh.curvature import Left
    from core.mesh.source import TriangleSource
    from core.moments import Moments
    from core.progress import Progress
    from core.quantity import Unit

# Up to this many triangles the shells are looked at in passing, and up to the other one for an answer to a program.
MOST_LOOKED_AT: Final = 1_000_000
MOST_ASKED: Final = 3_000_000
# Suffix → name of the formats beside STL, whose readers are imported only for them.
OTHER_FORMATS: Final = {"obj": "OBJ", "ply": "PLY", "off": "OFF", "3mf": "3MF", "glb": "GLB"}
# A restored volume closer to the faceted one than this, relative, is the same: the form has no curved faces.
_SAME: Final = 1e-12


class Weighing(Protocol):
    """What says how heavy a body is: a material, a density, or a weighed mass."""

    @property
    def label(self) -> str:
        """What says it, as shown."""
        ...

    @property
    def basis(self) -> str:
        """Where the mass comes from: computed or weighed."""
        ...

    def mass_of(self, volume: float) -> float | None:
        """Return the mass in kg of a volume in m³, or None."""
        ...


@dataclass(frozen=True, eq=False)
class MeshReading:
    """A mesh file with the unit, the mass and the axis that were asked for.

    Attributes:
        name: the file's path, as it was given.
        survey: of the file, in file units.
        unit: the length unit of the file.
        unit_assumed: whether nobody named that unit.
        weighing: what says its mass; None: nothing.
        axis: that J is asked about, m in the file's frame.
        restored: moments with curvature restored, file units, unit density; None where that was not done.
        left: how far the restored values may still be off, relative; None where that was not done.
        counts_restored: whether the restored values are the ones that count.
        shells: how many connected shells; None where they were not counted.
        findings: further checks on the file.
        remarks: further sentences that belong beside the values.
        how_to_weigh: what gives a mass, as a clause for the reader.

    """

    name: str
    survey: MeshSurvey
    unit: Unit
    unit_assumed: bool = False
    weighing: Weighing | None = None
    axis: AxisLine | None = None
    restored: Moments | None = None
    left: Left | None = None
    counts_restored: bool = False
    shells: int | None = None
    findings: tuple[Check, ...] = ()
    remarks: tuple[str, ...] = ()
    how_to_weigh: str = "set a material, a density or a weighed mass"

    @cached_property
    def faceted(self) -> Moments | None:
        """The volume between the facets, unit density, m."""
        return None if self.survey.solid is None else self.survey.solid.enlarged(self.unit.factor)

    @cached_property
    def curved(self) -> Moments | None:
        """The volume with curvature restored, unit density, m."""
        return None if self.restored is None else self.restored.enlarged(self.unit.factor)

    @property
    def geometry(self) -> Moments | None:
        """The volume that counts, unit density, m."""
        return self.curved if self.counts_restored and self.curved is not None else self.faceted

    def weighed(self, geometry: Moments | None) -> Moments | None:
        """Return a volume at unit density as a body in kg; None where nothing says what it weighs."""
        if geometry is None or self.weighing is None:
            return None
        mass = self.weighing.mass_of(float(geometry.mass))
        return None if mass is None else geometry.with_mass(mass)

    @cached_property
    def body(self) -> Moments | None:
        """The moments that count, kg and m in the file's frame."""
        return self.weighed(self.geometry)

    @property
    def basis(self) -> str:
        """Where the values come from: computed, estimated, or no volume and why."""
        restored = self.counts_restored and self.curved is not None
        return f"{self.survey.basis}, curvature restored" if restored else self.survey.basis

    @property
    def subject(self) -> Subject:
        """The body that the sheet is about."""
        reason = ""
        if self.body is None:
            reason = self.survey.basis if self.survey.solid is None else f"no mass: {self.how_to_weigh}"
        return Subject(self.body, self.geometry, "file", self.axis, self.basis, reason)

    @property
    def volume(self) -> float | None:
        """The volume that counts, m³."""
        return None if self.geometry is None else float(self.geometry.mass)

    @property
    def volume_label(self) -> str:
        """What the volume that counts is called."""
        if self.counts_restored and self.curved is not None:
            return "Volume, curvature restored"
        return "Volume, as faceted" if self.survey.basis == "computed" else f"Volume, {self.survey.basis}"

    @property
    def area(self) -> float:
        """Area of the facets, m²."""
        return self.survey.area * self.unit.factor**2

    @property
    def bounds(self) -> FloatArray:
        """Lowest and highest corner of the box around it, (2, 3) m."""
        return self.survey.bounds * self.unit.factor

    @cached_property
    def checks(self) -> tuple[Check, ...]:
        """The verdict on the mesh, and whether such a body can exist."""
        checks = [check_mesh(self.survey, self.name), *self.findings]
        if self.unit_assumed:
            text = f"{self.name}: no length unit was given; {self.unit.symbol} was assumed."
            checks.append(Check("unit", ok=True, text=text))
        if self.body is not None:
            # A round face reaches a little beyond its facets: the box's diagonal leaves room for that.
            reach = float(np.linalg.norm(self.bounds[1] - self.bounds[0]))
            checks += check_body(self.body, name=self.name, volume=self.volume, reach=reach, bounds=self.bounds)
        return tuple(checks)

    @property
    def sources(self) -> tuple[tuple[str, str], ...]:
        """Pairs of basis and text: the file, its unit, and what says its mass."""
        size = self.survey.bounds[1] - self.survey.bounds[0]
        extent = " × ".join(f"{value:.4g}" for value in size)
        guess = ", which was assumed" if self.unit_assumed else ""
        shells = "" if self.shells is None else f" in {self.shells} shell{'' if self.shells == 1 else 's'}"
        file = (
            f"{self.survey.triangles} triangles{shells}, {self.survey.format}; "
            f"lengths in {self.unit.symbol}{guess}: {extent} {self.unit.symbol}"
        )
        mass = () if self.weighing is None else ((self.weighing.basis, f"mass from {self.weighing.label}"),)
        return (self.basis, file), *mass

    @property
    def notes(self) -> tuple[str, ...]:
        """What was noticed on the file, and what restored curvature makes of it."""
        check = check_mesh(self.survey, self.name)
        remarkable = self.survey.verdict != "closed" or self.survey.notes
        said = (check.text,) if check.ok and remarkable else ()
        return (*said, *self.remarks, *self._curvature_note())

    @property
    def cautions(self) -> tuple[str, ...]:
        """What may make the values wrong."""
        if not self.unit_assumed:
            return ()
        said = (
            f"An STL file says no length unit: {self.unit.symbol} was assumed. In another unit mass changes "
            "with the third and inertia with the fifth power of the ratio."
        )
        return (said,)

    def _curvature_note(self) -> tuple[str, ...]:
        if self.faceted is None or self.curved is None:
            return ()
        change = float(self.curved.mass / self.faceted.mass) - 1
        if abs(change) < _SAME:
            return ()
        moments = self.curved.principal.moments / self.faceted.principal.moments - 1
        counted = "as restored" if self.counts_restored else "as faceted"
        said = (
            f"Restoring the curvature behind the facets changes the volume by {change:+.3%} and the "
            f"principal moments at equal density by {moments.min():+.3%} to {moments.max():+.3%}; "
            f"the values count the form {counted}."
        )
        if self.left is not None:
            volume, inertia = self.left.volume, self.left.inertia
            said += f" What it leaves is estimated at {volume:.1g} of the volume and {inertia:.1g} of J."
        return (said,)


@dataclass(frozen=True)
class MeshRequest:
    """What to find out about mesh files.

    Attributes:
        unit, unit_assumed, weighing, axis, how_to_weigh: as of a MeshReading.
        count_restored: make the restored values the ones that count, however many triangles there are.
        count_shells: count the shells, however many triangles there are.

    """

    unit: Unit
    unit_assumed: bool = False
    weighing: Weighing | None = None
    axis: AxisLine | None = None
    count_restored: bool = False
    count_shells: bool = False
    how_to_weigh: str = "set a material, a density or a weighed mass"


def read_mesh(path: str | Path, request: MeshRequest, progress: Progress | None = None) -> MeshReading:
    """Return what a mesh file holds; curvature and shells where they are asked for or cost next to nothing.

    Raises:
        MeshFileError: no sound mesh file.
        Cancelled: progress was cancelled.

    """
    from core.mesh import AT_ONCE
    from core.mesh.shells import shells_of
    from core.mesh.survey import survey_source

    source, named = _source_of(path, progress)
    survey = survey_source(source, progress)
    reading = MeshReading(
        str(path),
        survey,
        named if request.unit_assumed and named is not None else request.unit,
        request.unit_assumed and named is None,
        request.weighing,
        request.axis,
        counts_restored=request.count_restored,
        how_to_weigh=request.how_to_weigh,
    )
    if survey.triangles <= (MOST_ASKED if request.count_shells else MOST_LOOKED_AT):
        reading = _with_census(reading, source, progress)
    elif request.count_shells:
        reading = replace(_not_looked_at(reading), shells=shells_of(source, progress))
    else:
        reading = _not_looked_at(reading)
    asked = request.count_restored or (request.count_shells and survey.triangles <= MOST_LOOKED_AT)
    if survey.triangles <= AT_ONCE or asked:
        return _with_curvature(reading, source)
    remark = f"Curvature was not restored, because the file has more than {AT_ONCE} triangles."
    return replace(reading, remarks=(*reading.remarks, remark))


def _not_looked_at(reading: MeshReading) -> MeshReading:
    text = (
        f"{reading.name}: with {reading.survey.triangles} triangles, nothing was looked for that is counted twice; "
        "the window does it when asked."
    )
    return replace(reading, findings=(*reading.findings, Check("counted twice", ok=True, text=text)))


def _source_of(path: str | Path, progress: Progress | None) -> tuple[TriangleSource, Unit | None]:
    """Return the triangles of a mesh file, and the length unit that it names itself, if it does."""
    from core.mesh.stl import open_stl

    suffix = str(path).lower().rpartition(".")[2]
    if suffix not in OTHER_FORMATS:
        return open_stl(path), None
    from core.mesh.formats import read_bodies
    from core.mesh.source import ArraySource
    from core.quantity import UNITS_BY_KIND, Kind

    bodies = read_bodies(path, progress)
    triangles = np.concatenate([body.triangles for body in bodies])
    factors = {body.metres_per_unit for body in bodies}
    units = [unit for unit in UNITS_BY_KIND[Kind.LENGTH] if factors == {unit.factor}]
    return ArraySource(triangles, str(path), OTHER_FORMATS[suffix]), units[0] if units else None


def _with_census(reading: MeshReading, source: TriangleSource, progress: Progress | None) -> MeshReading:
    """Return the reading with its shells counted, and what the census of them found."""
    from core.mesh.census import census
    from core.mesh.mesh_check import check_census
    from core.mesh.survey import gathered

    taken = census(gathered(source, reading.survey.triangles), progress)
    found = check_census(taken, reading.name, lambda finding: _surplus(reading, finding.extra))
    return replace(reading, shells=len(taken.shells.area), findings=(*reading.findings, *found))


def _surplus(reading: MeshReading, extra: Moments | None) -> str:
    """Return volume, mass and share of J that are counted too much, as a sentence; "" where nobody can tell."""
    whole = reading.faceted
    if extra is None or whole is None or float(extra.mass) <= 0:
        return ""
    more = extra.enlarged(reading.unit.factor)
    dense = reading.weighing is not None and reading.weighing.basis != "weighed"
    mass = reading.weighing.mass_of(float(more.mass)) if reading.weighing is not None and dense else None
    axis, weighed = reading.axis, "" if mass is None else f", {mass:.4g} kg"
    if axis is None:
        point, direction, name = whole.centre, whole.principal.axes[2], "the largest principal moment"
    else:
        point, direction = np.asarray(axis.point), np.asarray(axis.direction)
        name = f"J about {axis.name}"
    share = float(more.inertia_about_axis(point, direction) / whole.inertia_about_axis(point, direction))
    return f" Too much: {float(more.mass) * 1e6:.4g} cm³{weighed}, {share:.3%} of {name}."


def _with_curvature(reading: MeshReading, source: TriangleSource) -> MeshReading:
    """Return the reading with its curvature restored, or with the reason why not."""
    from core.mesh import can_restore, restored
    from core.mesh.survey import gathered

    if not can_restore(reading.survey):
        remark = f"Curvature was not restored, because the mesh is {reading.survey.verdict}."
        return replace(reading, remarks=(*reading.remarks, remark)) if reading.counts_restored else reading
    body = restored(gathered(source, reading.survey.triangles), reading.survey)
    return reading if body is None else replace(reading, restored=body.moments, left=body.left)
