"""What needs a look: the physical checks on every part and on the total, and the verdicts on its meshes."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import compress
from typing import TYPE_CHECKING

import numpy as np

from core.assembly.bodies import KnownAxial, ShapeBody
from core.assembly.linked_groups import link_checks
from core.assembly.mesh_findings import census_checks
from core.checks import Check, check_body, surely_sound
from core.moments import Moments

if TYPE_CHECKING:
    from core.assembly.assembly import Assembly
    from core.assembly.nodes import Part

# A drive axis turned further than this from a known part's own axis sees the transverse inertia that was filled in.
OBLIQUE = 1e-6
# Of so many new parts, finding the plainly sound ones at once saves time.
WORTH_SCREENING = 20


@dataclass(frozen=True)
class Finding:
    """A check and the line it is about; key "" is the whole assembly. also: key of a second line it is about."""

    key: str
    name: str
    check: Check
    also: str = ""


def findings_of(assembly: Assembly) -> tuple[Finding, ...]:
    """Return every check on every part, in the order of the ledger, then on linked files, and those on the total."""
    found = [Finding(part.key, part.name, check) for part in assembly.table.parts for check in part.checks]
    return (*found, *_further(assembly))


def telling_findings(assembly: Assembly) -> tuple[Finding, ...]:
    """Return what a reader has to know: the findings that failed and the remarks, and all those on the total.

    Of thousands of parts it takes a small part of the time that all findings take.
    """
    parts = assembly.table.parts
    _screen([part for part in parts if "telling" not in vars(part)])
    found = [Finding(part.key, part.name, check) for part in parts for check in part.telling]
    return (*found, *_further(assembly))


def _screen(parts: list[Part]) -> None:
    """Find at once of which of many new parts no check has anything to tell; the others are checked one by one."""
    plain = [part for part in parts if isinstance(part.body, ShapeBody) and not part.cuts and part.single is not None]
    if len(plain) < WORTH_SCREENING:
        return
    singles = [part.single or Moments.nothing() for part in plain]
    moments = Moments(
        np.array([one.mass for one in singles]), np.array([one.centre for one in singles]),
        np.array([one.spread for one in singles]),
    )
    volume = np.array([np.nan if part.volume is None else part.volume for part in plain])
    sound = surely_sound(moments, volume, np.array([part.bounds for part in plain]))
    for part in compress(plain, sound.tolist()):
        part.known_sound()


def _further(assembly: Assembly) -> list[Finding]:
    found = [
        Finding(part.key, part.name, check)
        for index, part in enumerate(assembly.table.parts)
        if not isinstance(part.body, ShapeBody)
        for check in (*census_checks(part), *_oblique(assembly, part, index))
    ]
    found += [Finding(group.key, group.name, check) for group, check in link_checks(assembly)]
    if assembly.table.parts and len(assembly.without_mass) < len(assembly.table.parts):
        found += [Finding("", assembly.name, check) for check in _total_checks(assembly)]
    return found


def _oblique(assembly: Assembly, part: Part, index: int) -> tuple[Check, ...]:
    """Tell where the drive axis sees inertia that a data sheet did not give."""
    if not isinstance(part.body, KnownAxial):
        return ()
    rows = assembly.table.standing.turn[assembly.table.owner == index]
    tilt = np.linalg.norm(np.cross(rows[..., 2], assembly.drive_axis.unit), axis=-1).max()
    if tilt < OBLIQUE:
        return ()
    text = (
        f"{part.name}: its data sheet gives J about its own axis only, which is not parallel to "
        f"{assembly.drive}; across the axis it stands in as a cylinder {part.body.length * 1e3:.4g} mm long"
    )
    return (Check("data sheet", ok=False, text=text),)


def _total_checks(assembly: Assembly) -> list[Check]:
    return check_body(assembly.total, name="total", bounds=assembly.bounds)
