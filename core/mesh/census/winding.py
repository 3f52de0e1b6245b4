"""Facets that wind against their neighbours, found by carrying the winding on from facet to facet."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.grouping import hang_together

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray
    from core.mesh.census.sheets import Seams
    from core.mesh.grouping import Labels


@dataclass(frozen=True, eq=False)
class Winding:
    """Which facets to turn so that all agree.

    Attributes:
        against: facets, ascending, that wind against the larger part of their sheet, by area.
        one_sided: sheets that have no two sides; nothing can make their facets agree.
    """

    against: IntArray
    one_sided: IntArray


def winding_of(seams: Seams, sheet: Labels, area: FloatArray) -> Winding:
    """Return which facets wind against the others of their sheet (n,), given the area (n,) of each facet.

    Every facet stands for two things, itself and itself turned; what agrees hangs together. A sheet in which a facet
    and its own reverse hang together is one-sided.
    """
    if len(seams.against) == 0:
        return Winding(np.empty(0, np.int64), np.empty(0, np.int64))
    agree, differ = seams.along // 3, seams.against // 3
    some = np.concatenate([2 * agree[:, 0], 2 * agree[:, 0] + 1, 2 * differ[:, 0], 2 * differ[:, 0] + 1])
    others = np.concatenate([2 * agree[:, 1], 2 * agree[:, 1] + 1, 2 * differ[:, 1] + 1, 2 * differ[:, 1]])
    label = hang_together(2 * len(sheet), some, others).reshape(-1, 2)
    sheets = int(sheet.max()) + 1
    one_sided = np.unique(sheet[label[:, 0] == label[:, 1]]).astype(np.int64)
    first = np.empty(sheets, np.int64)
    first[sheet[::-1]] = np.arange(len(sheet))[::-1]
    turned = label[:, 0] != label[first[sheet], 0]
    turned_area, whole = np.bincount(sheet, area * turned, sheets), np.bincount(sheet, area, sheets)
    against = turned ^ (2 * turned_area > whole)[sheet]
    against[np.isin(sheet, one_sided)] = False
    return Winding(np.flatnonzero(against), one_sided)
