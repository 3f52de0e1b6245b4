"""The overlaps of an assembly as findings beside the others."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from core.assembly.findings import Finding
from core.assembly.overlaps import overlaps_of
from core.checks import Check

if TYPE_CHECKING:
    from core.assembly.assembly import Assembly
    from core.assembly.overlaps import Overlap, Overlaps
    from core.progress import Progress

OVERLAP: Final = "overlap"
# Up to this many bodies the command line looks for overlaps: some seconds where they are many.
MOST_BODIES_AT_ONCE: Final = 2_000
_MOST_NAMED = 3


def overlap_findings(assembly: Assembly, overlaps: Overlaps) -> tuple[Finding, ...]:
    """Return a finding for every two parts that overlap, and one that says what was looked at.

    An overlap fails unless it is marked as meant.
    """
    found = [
        Finding(one.keys[0], one.names[0], Check(OVERLAP, one.meant is not None, _sentence(assembly, one)), one.keys[1])
        for one in overlaps.found
    ]
    return (*found, Finding("", assembly.name, Check(OVERLAP, ok=True, text=_looked_at(assembly, overlaps))))


def overlaps_looked_for(assembly: Assembly, progress: Progress | None = None) -> tuple[Finding, ...]:
    """Return the findings of a search, or of more than MOST_BODIES_AT_ONCE bodies the one that says there was none.

    Raises:
        Cancelled: progress was cancelled.
    """
    bodies = len(assembly.table.owner)
    if bodies <= MOST_BODIES_AT_ONCE:
        return overlap_findings(assembly, overlaps_of(assembly, progress))
    text = f"{assembly.name}: overlaps are not looked for here among more than {MOST_BODIES_AT_ONCE} bodies"
    return (Finding("", assembly.name, Check(OVERLAP, ok=True, text=text)),)


def _sentence(assembly: Assembly, one: Overlap) -> str:
    first, second = one.names
    volume = f"{one.volume * 1e9:.4g} mm³"
    pairs = f"{one.count} times, together {volume}" if one.count > 1 else volume
    if one.keys[0] == one.keys[1]:
        met = f"{first}: its copies stand twice at one pose, {pairs}" if one.same else (
            f"{first}: its copies penetrate one another, {pairs}"
        )
    elif one.same:
        met = f"{first}: {second} is the same body at the same pose, {pairs}"
    else:
        met = f"{first}: {second} penetrates it, {pairs}"
    if one.meant is not None:
        names = dict(zip(one.keys, one.names, strict=True))
        carrier = names.pop(one.meant.carried_by, "")
        whose = f" and carried by {carrier}" if carrier else ""
        taken = f"{carrier} out of {', '.join(names.values())}" if carrier else "one out of the other"
        once = f". Count it once by cutting {taken}." if one.keys[0] != one.keys[1] else ""
        return f"{met}; it is marked as meant{whose}, and still {_twice(assembly, one)}{once}"
    mend = "Move one, count it once by cutting the one out of the other, or mark it as meant"
    if one.keys[0] == one.keys[1]:
        mend = "Move them apart, or mark it as meant"
    if one.same:
        mend = "Delete one of them"
    return f"{met}; {_twice(assembly, one)}. {mend}."


def _twice(assembly: Assembly, one: Overlap) -> str:
    """Return what is counted twice in mass and J, reckoned by the lighter of the two."""
    if one.mass is None or one.inertia is None:
        return "neither has a mass yet"
    share = "" if one.share is None else f", {100 * one.share:.3g} % of the total"
    least = "at least " if one.masses[0] != one.masses[1] else ""
    return f"counted twice: {least}{one.mass:.4g} kg and {one.inertia:.4g} kg·m² about {assembly.drive}{share}"


def _looked_at(assembly: Assembly, overlaps: Overlaps) -> str:
    bodies = {0: "no body was", 1: "1 body was"}.get(overlaps.bodies, f"{overlaps.bodies} bodies were")
    text = f"{assembly.name}: {bodies} looked at for overlap"
    if overlaps.left_out:
        named = [f"{one.name} ({one.why})" for one in overlaps.left_out[:_MOST_NAMED]]
        more = len(overlaps.left_out) - len(named)
        text += f"; left out: {', '.join(named)}" + (f" and {more} more" if more else "")
    if overlaps.skipped:
        text += "; there are more pairs than are told here" if overlaps.bodies else ": there are too many"
    return text
