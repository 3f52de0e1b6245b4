"""Documents as bytes, taken apart and put together again with something wrong in them."""

from __future__ import annotations

import io
import json
import zipfile
from typing import TYPE_CHECKING

import pytest
from strategies import mesh_body

from core.assembly import Assembly, DataSheet, DriveAxis, Group, KnownTensor, Part, ShapeBody
from core.document import read_document_bytes, save_document
from core.errors import DocumentError
from core.machine import Machine
from core.material import ByMaterial
from core.placement import Pose, Ring
from core.shapes import Cylinder, Tube

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

GOOD_COPY = "Take the last good copy, or ask for the file again."
BY_HAND = "Take the last good copy, or mend the entry where it was changed by hand."
BY_HAND_JSON = "Take the last good copy, or mend the JSON where it was changed by hand."

WEDGE = mesh_body((10, 20, 30), "wedge.stl", 1e-3)


def dial() -> Assembly:
    plate = Part("a", "plate", ShapeBody(Cylinder(0.4, 0.02)), ByMaterial("steel", 7850.0))
    rim = Part("b", "rim", ShapeBody(Tube(0.4, 0.38, 0.02)), ByMaterial("steel", 7850.0), copies=Ring(3))
    wedge = Part("c", "wedge", WEDGE, ByMaterial("steel", 7850.0), Pose((0.1, 0.0, 0.0)))
    rotor = Part("d", "rotor", KnownTensor(1.0, (0.0, 0.0, 0.0), (1e-3, 1e-3, 1e-3, 0.0, 0.0, 0.0)), DataSheet())
    return Assembly("dial", (Group("g", "turning", (plate, rim)), wedge, rotor), (DriveAxis("Spindle"),))


def saved(tmp_path: Path, assembly: Assembly | None = None) -> bytes:
    save_document(Machine(assembly or dial()), tmp_path / "start.masswright")
    return (tmp_path / "start.masswright").read_bytes()


def packed(entries: dict[str, bytes], how: int = zipfile.ZIP_STORED) -> bytes:
    file = io.BytesIO()
    with zipfile.ZipFile(file, "w", how) as archive:
        for name, data in entries.items():
            archive.writestr(name, data)
    return file.getvalue()


def unpacked(document: bytes) -> dict[str, bytes]:
    with zipfile.ZipFile(io.BytesIO(document)) as archive:
        return {name: archive.read(name) for name in archive.namelist()}


def refusal_of(document: bytes) -> str:
    with pytest.raises(DocumentError) as refusal:
        read_document_bytes(document, "dial.masswright")
    return str(refusal.value)


def refusal_after(tmp_path: Path, change: Callable[[dict], None]) -> str:
    """Return the refusal of the dial's document after a change in its JSON."""
    entries = unpacked(saved(tmp_path))
    data = json.loads(entries["assembly.json"])
    change(data)
    return refusal_of(packed({**entries, "assembly.json": json.dumps(data).encode()}))


def refusal_of_json(text: str | bytes) -> str:
    return refusal_of(packed({"assembly.json": text.encode() if isinstance(text, str) else text}))
