"""The verdict on a mesh in one sentence, with how far its values may be off."""

import numpy as np
from mesh_files import box, quartered

from core.mesh import survey_triangles
from core.mesh.mesh_check import check_mesh

BOX = box(40, 30, 20)


def text_of(triangles: np.ndarray) -> str:
    return check_mesh(survey_triangles(triangles), "lid").text


def test_an_open_mesh_says_what_its_caps_may_leave_out():
    triangles = BOX[~(BOX[..., 2] == 20).all(axis=1)]
    text = text_of(triangles)
    # 2/3·1200·√(1200/π) = 15635 of 24000.
    assert "lid: the mesh is open, with 4 open edges; estimated: holes closed flat." in text
    assert "What the flat caps leave out may change the volume by about 0.65 of it" in text
    assert not check_mesh(survey_triangles(triangles), "lid").ok


def test_a_small_hole_leaves_little_out():
    # A facet of 30·20/2/256 = 1.17: 2/3·1.17·√(1.17/π) = 0.477 of 24000.
    triangles = quartered(BOX, 4)
    assert "may change the volume by about 2e-05 of it" in text_of(triangles[1:])


def test_a_sound_mesh_says_nothing_of_doubt():
    assert text_of(BOX) == "lid: the mesh is closed."
