"""What the evidence on a mesh means: findings in words, each with its facets and the mends that there are."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.census.overlaps import MOST_CUTS
from core.mesh.census.sheets import collapsed_of, seams_of
from core.mesh.census.shells import INSIDE_OUT, VOID_OUTWARD
from core.mesh.source import ArraySource
from core.mesh.summing import sum_up
from core.moments import Moments

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    from core.arrays import IntArray
    from core.mesh.census.taking import Evidence

# Findings of one kind that are told one by one; of more, the rest is told together.
MOST_SINGLY = 20


@dataclass(frozen=True, eq=False)
class MeshFinding:
    """Something about a mesh that its reader should know.

    Attributes:
        name: of its kind, such as "counted twice"; see FINDINGS.
        text: what was found, what it does to the values, and what can be done, in sentences.
        facets: those concerned, to be lit up.
        mends: keys of core.mesh.mend.MENDS that fit, the likeliest first.
        changes: for each mend, what it adds to the body at unit density, file units (less than nothing where it
            takes something away); None where nobody can tell before it is done.
        bound: how much the volume may be off because of it, file units; 0 where that is not the question.
        harmless: whether the values are right as they are.
    """

    name: str
    text: str
    facets: IntArray
    mends: tuple[str, ...] = ()
    changes: tuple[Moments | None, ...] = ()
    bound: float = 0.0
    harmless: bool = False

    @property
    def extra(self) -> Moments | None:
        """What is counted too much, as a body at unit density in file units: what the first mend takes away."""
        change = self.changes[0] if self.changes else None
        return None if change is None else -change

    @property
    def volume_change(self) -> float | None:
        """How much the first mend changes the volume, file units; None where nobody can tell."""
        change = self.changes[0] if self.changes else None
        return None if change is None else float(change.mass)


FINDINGS = (
    "inside out", "shell inside out", "void wound outward", "counted twice", "hairline cracks", "wide cracks",
    "open edges", "reversed facets", "one-sided", "duplicate facets", "back to back facets", "facets without area",
    "not looked at",
)


def findings_of(evidence: Evidence) -> tuple[MeshFinding, ...]:
    """Return all findings on a mesh, those that change the values most first."""
    kinds = (
        _whole, _inside_out, _voids, _twins, _overlaps, _cracks, _holes, _reversed, _doubled, _opposed, _without_area,
        _unknown,
    )
    return tuple(finding for kind in kinds for finding in kind(evidence))


def _share(evidence: Evidence, volume: float) -> str:
    """Return a volume as a share of the mesh's own, in words."""
    whole = abs(float(evidence.shells.volume.sum()))
    return f"{abs(volume) / whole:.3g} of the volume" if whole > 0 else "more than there is"


def _called(evidence: Evidence, shell: int) -> str:
    return f"shell {shell + 1} of {len(evidence.shells)}"


def _counted(evidence: Evidence, shell: int) -> Moments:
    """Return what a shell adds to the values, which are those of the mesh turned where it faces inwards."""
    body = evidence.shells.body(shell)
    return -body if evidence.turned else body


def _total(bodies: list[Moments]) -> Moments:
    batch = Moments(*(np.stack([getattr(body, name) for body in bodies]) for name in ("mass", "centre", "spread")))
    return batch.total()


def _per_shell(
    evidence: Evidence, shells: IntArray, make: Callable[[Evidence, list[int]], MeshFinding]
) -> Iterator[MeshFinding]:
    """Yield a finding per shell, or of many one on those that are left over."""
    for shell in shells[:MOST_SINGLY].tolist():
        yield make(evidence, [shell])
    if len(shells) > MOST_SINGLY:
        yield make(evidence, shells[MOST_SINGLY:].tolist())


def _facets(evidence: Evidence, shells: list[int]) -> IntArray:
    return np.sort(np.concatenate([evidence.shells.facets_of(shell) for shell in shells]))


def _whole(evidence: Evidence) -> Iterator[MeshFinding]:
    if evidence.turned:
        yield MeshFinding(
            "inside out", "All of the mesh faces inwards. The values are those of the mesh turned; the mend turns the"
            " facets themselves.", np.arange(len(evidence.corners)), ("turn",), (Moments.nothing(),), harmless=True,
        )


def _with_role(evidence: Evidence, role: str) -> IntArray:
    return np.array([i for i, found in enumerate(evidence.shells.role) if found == role and evidence.twin[i] == i],
                    np.int64)


def _inside_out(evidence: Evidence) -> Iterator[MeshFinding]:
    def make(evidence: Evidence, shells: list[int]) -> MeshFinding:
        body = _total([_counted(evidence, shell) for shell in shells])
        who = _called(evidence, shells[0]) if len(shells) == 1 else f"{len(shells)} more shells"
        text = (
            f"{_capital(who)} faces inwards although it lies in no solid: {_share(evidence, float(body.mass))} is taken"
            " away where it should be added. Turn it."
        )
        return MeshFinding("shell inside out", text, _facets(evidence, shells), ("turn",), (body.times(-2.0),))

    return _per_shell(evidence, _with_role(evidence, INSIDE_OUT), make)


def _voids(evidence: Evidence) -> Iterator[MeshFinding]:
    def make(evidence: Evidence, shells: list[int]) -> MeshFinding:
        body = _total([_counted(evidence, shell) for shell in shells])
        single = len(shells) == 1
        who = _called(evidence, shells[0]) if single else f"{len(shells)} more shells"
        where = f"inside shell {int(evidence.shells.inside[shells[0]]) + 1}" if single else "inside others"
        text = (
            f"{_capital(who)}, {where}, faces outwards like a solid: {_share(evidence, float(body.mass))} is counted"
            " twice. If it is a void, turn it; if there is material in it, unite the shells."
        )
        changes = (body.times(-2.0), -body)
        return MeshFinding("void wound outward", text, _facets(evidence, shells), ("turn", "unite"), changes)

    return _per_shell(evidence, _with_role(evidence, VOID_OUTWARD), make)


def _twins(evidence: Evidence) -> Iterator[MeshFinding]:
    def make(evidence: Evidence, shells: list[int]) -> MeshFinding:
        body = _total([_counted(evidence, shell) for shell in shells])
        if len(shells) == 1:
            first = int(evidence.twin[shells[0]]) + 1
            who = f"{_called(evidence, shells[0])} is shell {first} over again, facet by facet"
        else:
            who = f"{len(shells)} more shells are others over again, facet by facet"
        text = f"{_capital(who)}: {_share(evidence, float(body.mass))} is counted twice. Drop the duplicates."
        return MeshFinding("counted twice", text, _facets(evidence, shells), ("drop duplicates",), (-body,))

    return _per_shell(evidence, np.flatnonzero(evidence.twin != np.arange(len(evidence.twin))), make)


def _overlaps(evidence: Evidence) -> Iterator[MeshFinding]:
    found = sorted(evidence.overlaps.found, key=lambda overlap: -float(overlap.common.mass))
    for overlap in found[:MOST_SINGLY]:
        one, other = overlap.shells
        added = (float(evidence.shells.volume[one]) > 0) != evidence.turned
        extra = overlap.common if added else -overlap.common
        what = "counted" if added else "taken away"
        text = (
            f"Shells {one + 1} and {other + 1} of {len(evidence.shells)} overlap:"
            f" {_share(evidence, float(extra.mass))} is {what} twice. Unite them."
        )
        yield MeshFinding("counted twice", text, overlap.facets, ("unite",), (-extra,))
    rest = found[MOST_SINGLY:]
    if rest:
        text = f"{len(rest)} more pairs of shells overlap, each by less. Unite them."
        facets = np.unique(np.concatenate([overlap.facets for overlap in rest]))
        yield MeshFinding("counted twice", text, facets, ("unite",), (None,))


def _cracks(evidence: Evidence) -> Iterator[MeshFinding]:
    cracks = evidence.cracks
    if cracks is None:
        return
    bound = cracks.gap * float(evidence.shells.area.sum())
    size = float(np.linalg.norm(np.ptp(evidence.points, axis=0)))
    name = "hairline cracks" if cracks.hairline else "wide cracks"
    how = f"{cracks.edges} open edges, at most {cracks.gap / size:.2g} of the part's size apart"
    effect = f"The volume is off by at most {_share(evidence, bound)}"
    text = f"{name.capitalize()}: {how}. {effect}. A weld closes them."
    yield MeshFinding(name, text, cracks.facets, ("weld",), (None,), bound=bound)


def _holes(evidence: Evidence) -> Iterator[MeshFinding]:
    loops = sorted(evidence.loops, key=lambda loop: -loop.area)
    closes = len(evidence.seams.against) == 0
    mends, advice = (("close flat",), " Close it flat, or mend it where it was made.") if closes else ((), "")
    for loop in loops[:MOST_SINGLY]:
        text = (
            f"A hole with an edge of {len(loop.points)} sides, {loop.length:.4g} file units long, in"
            f" {_called(evidence, loop.shell)}: what is missing there may hold {_share(evidence, loop.bulge)}.{advice}"
        )
        yield MeshFinding("open edges", text, loop.facets, mends, (None,) * len(mends), bound=loop.bulge)
    rest = loops[MOST_SINGLY:]
    if rest:
        bulge, length = sum(loop.bulge for loop in rest), sum(loop.length for loop in rest)
        text = (
            f"{len(rest)} more holes, with edges of {length:.4g} file units in all: what is missing there may hold"
            f" {_share(evidence, bulge)}.{advice}"
        )
        facets = np.unique(np.concatenate([loop.facets for loop in rest]))
        yield MeshFinding("open edges", text, facets, mends, (None,) * len(mends), bound=bulge)


def _reversed(evidence: Evidence) -> Iterator[MeshFinding]:
    against, one_sided = evidence.winding.against, evidence.winding.one_sided
    if len(against):
        verb = "winds against its neighbours" if len(against) == 1 else "wind against their neighbours"
        text = f"{_number(len(against), 'facet')} {verb}. Rewinding turns what is reversed."
        yield MeshFinding("reversed facets", text, against, ("rewind",), (None,))
    if len(one_sided):
        text = "The surface has only one side, like a twisted band, so that no facet can be said to face outwards."
        yield MeshFinding("one-sided", text, _facets(evidence, one_sided.tolist()))


def _doubled(evidence: Evidence) -> Iterator[MeshFinding]:
    in_twin = evidence.twin != np.arange(len(evidence.twin))
    copies = np.flatnonzero(evidence.doubles.copy > 0)
    copies = copies[~in_twin[evidence.shells.label[copies]]]
    if not len(copies):
        return
    verb = "occurs" if len(copies) == 1 else "occur"
    said = f"{_number(len(copies), 'facet')} of {len(evidence.corners)} {verb} again, with the same corners and winding"
    kept = evidence.corners[~evidence.doubles.spare]
    left = seams_of(kept, np.zeros(len(kept), np.int64)) if len(kept) else None
    if left is None or len(left.open) or len(left.against):
        text = f"{said}. Dropped alone they would leave holes; see what the shells say."
        yield MeshFinding("duplicate facets", text, copies)
        return
    sums, reference = sum_up(ArraySource(evidence.points[evidence.corners[copies]]))
    change = None if sums.volume == 0 else sums.moments(reference).times(1.0 if evidence.turned else -1.0)
    effect = "" if change is None else f": {_share(evidence, float(change.mass))} is counted twice"
    text = f"{said}{effect}. Drop the duplicates."
    yield MeshFinding("duplicate facets", text, copies, ("drop duplicates",), (change,))


def _opposed(evidence: Evidence) -> Iterator[MeshFinding]:
    opposed = evidence.doubles.opposed
    if len(opposed):
        text = f"{_number(len(opposed), 'facet')} lie back to back and cancel each other; the values are right."
        yield MeshFinding(
            "back to back facets", text, opposed, ("drop duplicates",), (Moments.nothing(),), harmless=True
        )


def _without_area(evidence: Evidence) -> Iterator[MeshFinding]:
    facets = np.flatnonzero(collapsed_of(evidence.corners))
    if len(facets):
        text = f"{_number(len(facets), 'facet')} with coinciding corners, which change no value."
        yield MeshFinding("facets without area", text, facets, harmless=True)


def _unknown(evidence: Evidence) -> Iterator[MeshFinding]:
    nothing = np.empty(0, np.int64)
    if not evidence.nesting.complete:
        text = "Too many shells share the same room to tell which lies in which; only their winding was looked at."
        yield MeshFinding("not looked at", text, nothing)
    refused, skipped = evidence.overlaps.refused, evidence.overlaps.skipped
    if len(refused):
        text = (
            f"Whether {_number(len(refused), 'shell')} overlap others could not be told, because their surface touches"
            " or cuts itself."
        )
        yield MeshFinding("not looked at", text, _facets(evidence, refused.tolist()))
    if skipped:
        text = f"{skipped} more pairs of shells with overlapping boxes were not cut; {MOST_CUTS} were."
        yield MeshFinding("not looked at", text, nothing)


def _number(count: int, noun: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'}"


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
