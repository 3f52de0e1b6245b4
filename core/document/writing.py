"""A machine as plain data for assembly.json."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from core.assembly import (
    Assembly,
    Body,
    Cut,
    DataSheet,
    DriveAxis,
    Driver,
    Group,
    KnownTensor,
    MeshBody,
    Node,
    Part,
    ShapeBody,
    walk,
)
from core.document.drive_data import data_of_drive
from core.document.link_path import path_from
from core.document.migration import MAJOR, MINOR, Data
from core.material import ByDensity, ByMaterial, PerArea, PerLength, Weighed
from core.placement import Copies, Mirrored, Pose, Ring, Row
from core.shapes import OutlinedShape, Shape

if TYPE_CHECKING:
    from core.assembly.seat import Seat
    from core.machine import Machine


def data_of_machine(machine: Machine, folder: str) -> Data:
    """Return everything that the machine says, as the schema has it; meshes by their SHA-256.

    Args:
        machine: to be written.
        folder: of the document's file, absolute; linked files are told from there.
    """
    drive = {"drive_settings": data_of_drive(machine.drive)} if machine.has_drive else {}
    return {**_data_of_assembly(machine.assembly, folder), **drive}


def _data_of_assembly(assembly: Assembly, folder: str) -> Data:
    meant = [
        {"key_a": mark.key_a, "key_b": mark.key_b, "carried_by": mark.carried_by, "note": mark.note}
        for mark in assembly.meant
    ]
    return {
        **({"meant": meant} if meant else {}),
        **_names_and_variants(assembly),
        "version": {"major": MAJOR, "minor": MINOR},
        "name": assembly.name,
        "drive": assembly.drive,
        "axes": [_axis(axis) for axis in assembly.axes],
        "members": [_node(node, folder) for node in assembly.members],
    }


def _names_and_variants(assembly: Assembly) -> Data:
    """Return the entries that most documents do without."""
    entries: Data = {}
    if assembly.names:
        entries["names"] = [{"name": one.name, "text": one.text, "note": one.note} for one in assembly.names]
    if assembly.variants:
        entries |= {"variants": list(assembly.variants), "variant": assembly.variant}
    return entries


def meshes_of(assembly: Assembly) -> dict[str, bytes]:
    """Return the mesh files that the assembly needs, by SHA-256."""
    return {
        node.body.asset.sha256: node.body.asset.data
        for node, _ in walk(assembly.members)
        if isinstance(node, Part) and isinstance(node.body, MeshBody)
    }


def _axis(axis: DriveAxis) -> Data:
    more: Data = {} if axis.second is None else {"second": _floats(axis.second)}
    more |= {"part": axis.part, "toward": _floats(axis.toward)} if axis.part else {}
    more |= {"typed": [list(pair) for pair in axis.typed]} if axis.typed else {}
    return {**more, "name": axis.name, "point": _floats(axis.point), "direction": _floats(axis.direction)}


def _node(node: Node, folder: str) -> Data:
    if isinstance(node, Group):
        members = [_node(member, folder) for member in node.members]
        return {**_common(node), **_link(node, folder), "kind": "group", "members": members}
    cuts = {"cuts": [{**_common(cut), "shape": _shape(cut.shape)} for cut in node.cuts]} if node.cuts else {}
    return {**_common(node), **cuts, "kind": "part", "body": _body(node.body), "driver": _driver(node.driver)}


def _link(group: Group, folder: str) -> Data:
    if group.link is None:
        return {}
    return {"link": {"path": path_from(folder, group.link.path), "sha256": group.link.sha256}}


def _common(line: Node | Cut) -> Data:
    only_in = {} if isinstance(line, Cut) or not line.only_in else {"only_in": list(line.only_in)}
    seat = {} if isinstance(line, Cut) or line.seat is None else {"seat": _seat(line.seat)}
    return {
        **only_in,
        **seat,
        "key": line.key,
        "name": line.name,
        "note": line.note,
        "typed": [list(pair) for pair in line.typed],
        "pose": _pose(line.pose),
        "copies": _copies(line.copies),
    }


def _pose(pose: Pose) -> Data:
    return {"position": _floats(pose.position), "turns": _floats(pose.turns)}


def _seat(seat: Seat) -> Data:
    places = {
        name: {"key": anchor.key, "datum": anchor.datum}
        for name, anchor in (("moving", seat.moving), ("target", seat.target))
    }
    return {
        **places, "facing": seat.facing, "offset": float(seat.offset), "aside": _floats(seat.aside),
        "turn": float(seat.turn),
    }


def _copies(copies: Copies) -> Data:
    if isinstance(copies, Ring):
        return {
            "kind": "ring", "count": copies.count, "point": _floats(copies.point),
            "direction": _floats(copies.direction), "start": float(copies.start), "span": float(copies.span),
            "turning": copies.turning,
        }
    if isinstance(copies, Row):
        return {"kind": "row", "count": copies.count, "step": _floats(copies.step)}
    if isinstance(copies, Mirrored):
        return {"kind": "mirrored", "point": _floats(copies.point), "normal": _floats(copies.normal)}
    return {"kind": "several", "count": copies.count}


def _body(body: Body) -> Data:
    if isinstance(body, ShapeBody):
        return _shape(body.shape)
    if isinstance(body, MeshBody):
        asset = body.asset
        mended: Data = {"mends": list(asset.mends), "source": asset.source} if asset.mends else {}
        return {
            **mended, "kind": "mesh", "mesh": asset.sha256, "name": asset.name,
            "metres_per_unit": float(body.metres_per_unit), "counts": body.counts, "origin": body.origin,
        }
    known: Data = {"mass": float(body.mass), "centre": _floats(body.centre), "source": body.source}
    if isinstance(body, KnownTensor):
        return {**known, "kind": "known tensor", "tensor": _floats(body.tensor), "about": body.about}
    return {
        **known, "kind": "known axial", "inertia_about_axis": float(body.inertia_about_axis),
        "length": float(body.length),
    }


def _shape(shape: Shape) -> Data:
    entry: Data = {"kind": "shape", "shape": shape.key, "dimensions": shape.values()}
    if isinstance(shape, OutlinedShape):
        entry["outline"] = [{"points": [_floats(point) for point in loop]} for loop in shape.outline.loops]
    return entry


def _driver(driver: Driver) -> Data:
    if isinstance(driver, ByMaterial):
        return {"kind": "material", "name": driver.name, "density": float(driver.density)}
    if isinstance(driver, ByDensity):
        return {"kind": "density", "density": float(driver.density)}
    if isinstance(driver, PerArea):
        return {"kind": "per area", "mass_per_area": float(driver.mass_per_area)}
    if isinstance(driver, PerLength):
        return {"kind": "per length", "mass_per_length": float(driver.mass_per_length)}
    if isinstance(driver, Weighed):
        return {"kind": "weighed", "mass": float(driver.mass)}
    return {"kind": "data sheet" if isinstance(driver, DataSheet) else "not set"}


def _floats(values: Any) -> list[float]:
    return [float(value) for value in values]
