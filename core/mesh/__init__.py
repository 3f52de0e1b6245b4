"""Meshes: strict reading of STL, and one look that tells whether a mesh is closed and what it encloses.

survey_file and survey_triangles give a MeshSurvey: verdict, volume, centre, second moment, in the file's own
length unit at unit density. count_shells says of how many separate surfaces a mesh consists. MeshAsset is a file's
bytes with that survey, as a document holds it.
"""

from core.mesh.asset import MeshAsset
from core.mesh.survey import MeshSurvey, count_shells, survey_file, survey_triangles

__all__ = ["MeshAsset", "MeshSurvey", "count_shells", "survey_file", "survey_triangles"]
