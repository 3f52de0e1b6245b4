"""The verdict on a mesh as a check: whether its values can be trusted, in one sentence."""

from __future__ import annotations

from typing import TYPE_CHECKING

from core.checks import Check

if TYPE_CHECKING:
    from core.mesh.survey import MeshSurvey

_SOUND = frozenset({"closed", "hairline cracks", "inside out"})
_MEND = "Mend it where it was made and export it again."


def check_mesh(survey: MeshSurvey, name: str) -> Check:
    """Return whether a mesh bounds a volume that is known, exactly or within what its cracks leave open."""
    ok = survey.verdict in _SOUND and survey.solid is not None
    edges = f"{survey.open_edges} open edge{'' if survey.open_edges == 1 else 's'}"
    found = f"{name}: the mesh is {survey.verdict}"
    if survey.verdict == "hairline cracks":
        found = f"{name}: the mesh has hairline cracks"
    if survey.open_edges:
        found += f", with {edges}"
    if survey.basis != "computed":
        found += f"; {survey.basis}"
    sentences = (f"{found}.{_crack_words(survey)}" if ok else f"{found}. {_MEND}", *survey.notes)
    return Check("mesh", ok, " ".join(sentences))


def _crack_words(survey: MeshSurvey) -> str:
    """Return how much the cracks can change the values, at most."""
    if not survey.crack_volume or survey.solid is None:
        return ""
    volume = survey.crack_volume / float(survey.solid.mass)
    smallest = float(survey.solid.principal.moments[0])
    inertia = f", the smallest moment of inertia by {survey.crack_inertia / smallest:.2g}" if smallest > 0 else ""
    return f" The cracks change the volume by at most {volume:.2g} of it{inertia}."
