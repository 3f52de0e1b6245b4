"""Meshes: strict reading of STL, and one look that tells whether a mesh is closed and what it encloses.

survey_file and survey_triangles give a MeshSurvey: verdict, volume, centre, second moment, in the file's own
length unit at unit density. restored gives the body behind the facets of a mesh for which can_restore holds (AT_ONCE:
up to how many triangles without making anybody wait). count_shells says of how many separate surfaces a mesh consists.
MeshAsset is a file's bytes with that survey, as a document holds it.

In packages and modules of their own, so that a plain survey does not wait for them: core.mesh.census (shells, holes and
all that is wrong with a mesh), core.mesh.mend (what can be done about it), core.mesh.formats (files other than STL).
"""

from core.mesh.asset import MeshAsset
from core.mesh.restoring import AT_ONCE, can_restore, restored
from core.mesh.survey import MeshSurvey, count_shells, survey_file, survey_triangles

__all__ = [
    "AT_ONCE", "MeshAsset", "MeshSurvey", "can_restore", "count_shells", "restored", "survey_file", "survey_triangles",
]
