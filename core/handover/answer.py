"""The answer of the command line as an object for JSON: SI units, full precision, whatever units are shown.

Every answer has the same keys. Values that there are none of are None: mass and inertia where nothing says
what a mesh weighs, everything about facets for a document. An inertia is about the centre of mass, along the
axes of the file or document, in tensor elements (off-diagonal = −∫xy dm).
"""

from __future__ import annotations

import json
import math
from typing import TYPE_CHECKING, Any, Final, TypeAlias

import numpy as np

from core.handover.lines import AxisLine
from core.moments import radius_of_gyration

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.arrays import FloatArray
    from core.assembly import Assembly, DriveAxis, Finding, Line
    from core.checks import Check
    from core.handover.lines import Subject
    from core.handover.mesh_reading import MeshReading
    from core.machine import Machine
    from core.moments import Moments

Answer: TypeAlias = dict[str, Any]

KEYS: Final = (
    "path",
    "triangles",
    "unit",
    "verdict",
    "closed",
    "open_edges",
    "shells",
    "basis",
    "area_m2",
    "volume_m3",
    "mass_kg",
    "centre_m",
    "inertia_kgm2",
    "principal_kgm2",
    "principal_axes",
    "radii_m",
    "curved",
    "axis",
    "checks",
)


def answer_of_mesh(reading: MeshReading) -> Answer:
    """Return the answer on one mesh file.

    Without a mass, `mass_kg`, `inertia_kgm2`, `principal_kgm2` and `axis.inertia_kgm2` are None; centre,
    principal axes, radii of gyration and the axis' offset are those of the volume at uniform density.
    `radii_m` are about the principal axes, in their order.
    """
    survey = reading.survey
    values: Answer = {
        "path": reading.name,
        "triangles": survey.triangles,
        "unit": reading.unit.symbol,
        "verdict": survey.verdict,
        "closed": survey.closed,
        "open_edges": survey.open_edges,
        "shells": reading.shells,
        "basis": reading.basis,
        "area_m2": reading.area,
        **_values(reading.body, reading.geometry, reading.volume),
        "curved": None,
        "axis": _axis(reading.body, reading.geometry, reading.axis),
        "checks": [check_answer(check) for check in reading.checks],
    }
    if reading.curved is not None:
        body = reading.weighed(reading.curved)
        values["curved"] = _values(body, reading.curved, float(reading.curved.mass))
        values["curved"]["axis"] = _axis(body, reading.curved, reading.axis)
        if reading.left is not None:
            values["curved"]["left"] = {"volume": reading.left.volume, "inertia": reading.left.inertia}
    return values


def answer_of_machine(machine: Machine, path: str, overlaps: tuple[Finding, ...] = ()) -> Answer:
    """Return the answer on a document: totals, drive, balance, ledger, and every check with the part it is about.

    Findings on overlaps, where somebody has looked for them, stand behind the others.

    `axis` is the drive axis, with its name, point and direction, `axes` are all of them. `volume_m3` is None where
    a part has none.
    A document with variants says which one the values are of ("": all lines), and the totals of each.
    """
    from core.assembly import ledger_of
    from core.handover.drive_answer import answer_of_balance, answer_of_drive
    from core.handover.sheet import subject_of_assembly

    assembly = machine.assembly
    subject, ledger = subject_of_assembly(assembly), ledger_of(assembly)
    about = {axis.name: _about(subject, axis) for axis in assembly.axes}
    return {
        **dict.fromkeys(KEYS),
        "path": path,
        "basis": subject.basis,
        **_values(subject.body, subject.form, _volume(assembly)),
        "axis": about[assembly.drive],
        "axes": list(about.values()),
        "checks": [
            {**check_answer(finding.check), "part": finding.name, "key": finding.key}
            for finding in (*machine.all_findings(), *overlaps)
        ],
        "drive": answer_of_drive(machine),
        "balance": answer_of_balance(machine),
        "ledger": [_line(line) for line in (*ledger.lines, ledger.total)],
        **(_variants(assembly) if assembly.variants else {}),
    }


def answer_of_refusal(path: str, error: str) -> Answer:
    """Return what stands in a list of answers for a file that gave none."""
    return {"path": path, "error": error}


def json_text(value: Any, indent: str = "") -> str:
    """Return JSON in ASCII: an object's members on lines of their own, a list of numbers or rows on one.

    Raises:
        ValueError: a number in it is not finite.

    """
    deeper = indent + "  "
    if isinstance(value, dict) and value:
        members = [f"{deeper}{json.dumps(key)}: {json_text(inner, deeper)}" for key, inner in value.items()]
        return "{\n" + ",\n".join(members) + f"\n{indent}}}"
    if isinstance(value, list) and any(isinstance(inner, dict) for inner in value):
        return "[\n" + ",\n".join(deeper + json_text(inner, deeper) for inner in value) + f"\n{indent}]"
    return json.dumps(value, allow_nan=False)


def _values(body: Moments | None, form: Moments | None, volume: float | None) -> Answer:
    principal = None if form is None else form.principal
    radii = None if principal is None or form is None else radius_of_gyration(principal.moments, form.mass)
    return {
        "volume_m3": volume,
        "mass_kg": None if body is None else float(body.mass),
        "centre_m": None if form is None else _listed(form.centre),
        "inertia_kgm2": None if body is None else _listed(body.inertia_about_centre),
        "principal_kgm2": None if body is None else _listed(body.principal.moments),
        "principal_axes": None if principal is None else _listed(principal.axes),
        "radii_m": None if radii is None else _listed(radii),
    }


def _axis(body: Moments | None, form: Moments | None, axis: AxisLine | None) -> Answer | None:
    if axis is None:
        return None
    return {
        "inertia_kgm2": None if body is None else float(body.inertia_about_axis(axis.point, axis.direction)),
        "offset_m": None if form is None else float(form.offset_from_axis(axis.point, axis.direction)),
        "radius_of_gyration_m": None if form is None else _radius(form, axis),
    }


def _radius(form: Moments, axis: AxisLine) -> float:
    return float(radius_of_gyration(form.inertia_about_axis(axis.point, axis.direction), form.mass))


def _about(subject: Subject, axis: DriveAxis) -> Answer:
    """Return what is said of the whole about one of the document's axes."""
    line = AxisLine(axis.name, axis.point, axis.direction)
    spot = {"name": axis.name, "point_m": list(axis.point), "direction": _listed(axis.unit)}
    return {**(_axis(subject.body, subject.form, line) or {}), **spot}


def _line(line: Line) -> Answer:
    return {
        "key": line.key,
        "name": line.name,
        "kind": line.kind,
        "depth": line.depth,
        "count": line.count,
        "times": line.times,
        "material": line.material,
        "basis": line.basis,
        "mass_kg": line.mass,
        "centre_m": None if line.centre is None else _listed(line.centre),
        "own_inertia_kgm2": line.own_inertia,
        "transfer_kgm2": line.transfer,
        "inertia_kgm2": line.inertia,
        "radius_of_gyration_m": line.radius_of_gyration,
        "share": line.share,
        "counts": line.counts,
    }


def _variants(assembly: Assembly) -> Answer:
    from core.assembly.variants import totals_by_variant

    totals = [(each, float(each.moments.mass)) for each in totals_by_variant(assembly)]
    return {
        "variant": assembly.variant,
        "variants": [
            {
                "name": each.variant, "mass_kg": mass or None, "parts_without_mass": each.without_mass,
                "centre_m": _listed(each.moments.centre) if mass else None,
                "axis_inertia_kgm2": each.inertia if mass else None,
            }
            for each, mass in totals
        ],
    }


def _volume(assembly: Assembly) -> float | None:
    parts = assembly.table.parts
    copies = np.bincount(assembly.table.owner, minlength=len(parts))
    volumes = [part.volume for part in parts]
    if not parts or any(volume is None for volume in volumes):
        return None
    return float(sum(count * (volume or 0.0) for count, volume in zip(copies, volumes, strict=True)))


def check_answer(check: Check) -> Answer:
    """Return a check as an object."""
    return {"name": check.name, "ok": bool(check.ok), "text": check.text}


def plain(values: float | Iterable[Any]) -> Any:
    """Return a number, or nested lists of them, with None for what is not finite: JSON knows no other number."""
    if isinstance(values, float):
        return values if math.isfinite(values) else None
    return [plain(value) for value in values]


def _listed(values: FloatArray) -> Any:
    """Return an array as nested lists, as `plain` does."""
    return plain(np.asarray(values, dtype=float).tolist())
