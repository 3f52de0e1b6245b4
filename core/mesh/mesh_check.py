"""The verdict on a mesh, and what its census found, as checks: whether its values can be trusted."""

from __future__ import annotations

from typing import TYPE_CHECKING

from core.checks import Check
from core.mesh.survey import SOUND

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.mesh.census import Census, MeshFinding
    from core.mesh.survey import MeshSurvey

_SAID_BY_THE_VERDICT = frozenset({"inside out", "hairline cracks", "open edges"})
_MEND = "Mend it where it was made and export it again."


def check_mesh(survey: MeshSurvey, name: str) -> Check:
    """Return whether a mesh bounds a volume that is known, exactly or within what its cracks leave open."""
    ok = survey.verdict in SOUND and survey.solid is not None
    edges = f"{survey.open_edges} open edge{'' if survey.open_edges == 1 else 's'}"
    found = f"{name}: the mesh is {survey.verdict}"
    if survey.verdict in {"hairline cracks", "mixed winding"}:
        found = f"{name}: the mesh has {survey.verdict}"
    if survey.open_edges:
        found += f", with {edges}"
    if survey.basis != "computed":
        found += f"; {survey.basis}"
    doubt = _doubt(survey)
    sentences = (f"{found}.{doubt}" if ok else f"{found}.{doubt} {_MEND}", *survey.notes)
    return Check("mesh", ok, " ".join(sentences))


def check_census(
    census: Census, name: str, more: Callable[[MeshFinding], str] = lambda _finding: ""
) -> tuple[Check, ...]:
    """Return what a census found that makes the values wrong or doubtful, beyond what the verdict says already.

    What `more` says of a finding, as a sentence with a blank before it, is put behind its text.
    """
    return tuple(
        Check(finding.name, ok=False, text=f"{name}: {finding.text}{more(finding)}")
        for finding in census.findings
        if not finding.harmless and finding.name not in _SAID_BY_THE_VERDICT
    )


def _doubt(survey: MeshSurvey) -> str:
    """Return how much what is open can change the values."""
    if survey.solid is None:
        return ""
    if survey.crack_volume:
        said, volume, inertia = "The cracks change the volume by at most", survey.crack_volume, survey.crack_inertia
    elif survey.open_volume:
        said = "What the flat caps leave out may change the volume by about"
        volume, inertia = survey.open_volume, survey.open_inertia
    else:
        return ""
    share = volume / float(survey.solid.mass)
    smallest = float(survey.solid.principal.moments[0])
    beside = f", the smallest moment of inertia by {inertia / smallest:.2g}" if smallest > 0 else ""
    return f" {said} {share:.2g} of it{beside}."
