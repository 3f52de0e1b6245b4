"""The checks on one part: its mesh or data sheet, and whether a body with such moments can exist."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.assembly.bodies import KnownAxial, KnownTensor, MeshBody
from core.assembly.cutting import WORTH_A_WORD
from core.checks import Check, check_body
from core.mesh.mesh_check import check_mesh

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.assembly.nodes import Part
    from core.measure import Measure

_WEIGHED_BY: dict[Measure, str] = {
    "volume": "material, density or weighed mass",
    "area": "mass per area or weighed mass",
    "length": "mass per length or weighed mass",
    "pieces": "weighed mass",
}


def checks_of_part(part: Part) -> tuple[Check, ...]:
    """Return the checks on one copy of a part, and on the mesh or the data sheet behind it."""
    checks: list[Check] = [*_entry_checks(part), *_cut_checks(part)]
    if part.single is None:
        if part.extent is not None and part.measure is not None:
            checks.append(
                Check("mass", ok=False, text=f"{part.name}: no {_WEIGHED_BY[part.measure]} is set, so the "
                      "totals leave it out. Choose one on the Part page")
            )
        return tuple(checks)
    known = isinstance(part.body, KnownTensor | KnownAxial)
    bounds = None if known else part.bounds
    reach = None if bounds is None else _reach(part)
    checks += check_body(part.single, name=part.name, volume=part.volume, reach=reach, bounds=bounds)
    return tuple(checks)


def _entry_checks(part: Part) -> tuple[Check, ...]:
    if isinstance(part.body, KnownTensor | KnownAxial):
        return part.body.entry_checks
    if not isinstance(part.body, MeshBody):
        return ()
    asset = part.body.asset
    verdict = check_mesh(asset.survey, part.name)
    if not asset.mends:
        return (verdict,)
    text = f"{part.name}: the mesh was mended after it was read: {', '.join(asset.mends)}."
    return verdict, Check("mends", ok=True, text=text)


def _cut_checks(part: Part) -> Iterator[Check]:
    """Tell of the cuts that stick out of the body or overlap, and of which only a part is counted."""
    cutting = part.cutting
    if cutting is None:
        return
    for cut, outside, shared in zip(part.cuts, cutting.outside, cutting.shared, strict=True):
        name = f"{part.name}, {cut.name}"
        if outside > WORTH_A_WORD:
            share = f"{100 * outside:.3g} % of it"
            yield Check("cut", ok=True, text=f"{name}: {share} is outside the body; only what is inside is counted")
        if shared > WORTH_A_WORD:
            share = f"{100 * shared:.3g} % of it"
            yield Check("cut", ok=True, text=f"{name}: {share} overlaps other cuts; what they share is counted once")


def _reach(part: Part) -> float | None:
    """Return how far the part's box reaches from its centre of mass, m."""
    if part.single is None:
        return None
    low, high = part.bounds
    farthest = np.maximum(np.abs(low - part.single.centre), np.abs(high - part.single.centre))
    return float(np.linalg.norm(farthest))
