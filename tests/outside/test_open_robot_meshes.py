"""Real meshes and declared inertials of two open robot descriptions, read from their packages on PyPI.

upkie-description 2.2.0, Apache License 2.0 (its tyre mesh: CC BY 4.0): a wheeled biped.
robot-properties-fingers 2.0.2, BSD 3-Clause License: robot fingers; it asks for large libraries that its data do not
need, so it is no part of the dev extra: pip install --no-deps robot-properties-fingers==2.0.2.

What they declare, checked below: no inertial comes from the mesh beside it. Those of the first package come from the
box or cylinder that stands for the link in collisions (five have slips, named below), most of the second one's from a
box of round dimensions; these agree with the shapes of core to round-off. For the others stands why they differ. The
meshes themselves are held against quadrature over the same facets, read, counted and integrated without core.mesh.
"""

from __future__ import annotations

import importlib.metadata
import importlib.util
import xml.etree.ElementTree as ET
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from oracles import assert_same_body, directed_edges_cancel, moments_of_facets

from core.facets import Facets
from core.mesh import MeshSurvey, survey_file
from core.moments import Moments
from core.placement import Placement, matrix_of_turns
from core.shapes.box import Box
from core.shapes.cylinder import Cylinder

UPKIE, FINGERS = "upkie-description", "robot-properties-fingers"
VERSIONS = {UPKIE: "2.2.0", FINGERS: "2.0.2"}

# Verdict and meshes, by their place below the package's folder meshes.
VERDICTS = {
    UPKIE: {
        "closed": (
            "add-ons/camera_support", "ankle_stator", "hollow_leg/hollow_hip", "mjbots/mj5208_stator",
            "mjbots/qdd100_horn", "mjbots/qdd100_rotor", "mjbots/qdd100_stator", "wheel_hub", "wheel_tire/wheel_tire",
        ),
        "hairline cracks": ("hollow_leg/hollow_femur",),
        "open": ("add-ons/handle", "mjbots/mj5208_rotor"),
        "mixed winding": ("hollow_leg/hollow_knee", "knee_stator"),
    },
    FINGERS: {
        "closed": (
            "SIM__BL-Finger_Base", "SIM__BL-Finger_Proximal", "edu/base_back", "edu/base_top", "edu/lower_link",
            "edu/upper_link", "finger_padding", "pro/center_axis_sim", "pro/detailed/SIM__BL-Finger_Tip_actual_tip",
            "pro/prox-sim", "pro/tip_link_sim",
        ),
        "hairline cracks": (
            "BL-M_Table_ASM_big", "BL-M_Table_ASM_small", "SIM_BL_FINGER_TIP_LINK", "Stage_simplified",
            "Tip_link_Modular_SIM", "edu/base_front", "edu/base_side_left", "edu/base_side_right", "edu/frame_wall",
            "edu/middle_link", "object_containment_sim", "pro/detailed/SIM__BL-Finger_Motor", "pro/int_sim",
            "pro/motor_sim", "pro/tip_sim",
        ),
        "open": (
            "BL_Finger_Holder_SIM", "SIM__BL-Finger_Intermediate", "high_table_boundary",
            "pro/detailed/SIM__BL-Finger_Base", "pro/detailed/SIM__BL-Finger_Center",
            "pro/detailed/SIM__BL-Finger_Intermediate", "pro/detailed/SIM__BL-Finger_Proximal",
            "pro/detailed/SIM__BL-Finger_Tip", "pro/detailed/SIM__BL-Finger_Tip_without_tip",
            "trifinger_table_without_border",
        ),
    },
}
MESHES = [(name, mesh, verdict) for name, told in VERDICTS.items() for verdict, group in told.items() for mesh in group]

# Why a declared inertial is not that of the mesh, with the meshes it is true of.
DIFFERENCES = {
    UPKIE: {
        "declared as the solid box or cylinder around the part": (
            "add-ons/handle", "ankle_stator", "mjbots/mj5208_rotor", "mjbots/mj5208_stator", "mjbots/qdd100_horn",
            "mjbots/qdd100_rotor", "mjbots/qdd100_stator", "wheel_hub", "wheel_tire/wheel_tire",
        ),
        "declared as the box around the handle, about another centre": ("add-ons/camera_support",),
        "no volume to compare: the facets wind both ways": ("knee_stator",),
    },
    FINGERS: {
        "declared as a solid box of round dimensions": (
            "BL_Finger_Holder_SIM", "SIM_BL_FINGER_TIP_LINK", "SIM__BL-Finger_Base", "SIM__BL-Finger_Intermediate",
            "SIM__BL-Finger_Proximal", "Stage_simplified", "finger_padding", "pro/center_axis_sim",
        ),
        "one plate or wall of several, declared together as one box": (
            "edu/base_back", "edu/base_front", "edu/base_side_left", "edu/base_top",
        ),
        "declared to 1 mm and 10⁻⁵ kg·m² only, and about another centre": (
            "edu/lower_link", "edu/middle_link", "edu/upper_link",
        ),
        "not the whole link: its motor, end stop and cables are drawn by a link of their own without mass": (
            "pro/int_sim", "pro/prox-sim",
        ),
        "declared with a centre 4 mm farther along the link, and a product of inertia of the other sign": (
            "pro/tip_link_sim",
        ),
        "declared with a centre 9 mm farther along the tip": ("pro/tip_sim",),
    },
}
COMPARED = [
    (name, mesh, reason) for name, told in DIFFERENCES.items() for reason, group in told.items() for mesh in group
]
# Nearer than this, of the mesh's diagonal and of the largest declared element, a row above would be untrue.
SAME_BODY = 0.01

# Declared with a length of 0.026 m where the cylinder has 0.26 m.
LEG_BONES = [(side, bone) for side in ("left", "right") for bone in ("femur", "tibia")]

# The boxes, in m, whose moments the second package declares. From its figures: b² + c² = 12·I/m for three pairs.
BOXES = {
    ("finger", "finger_base_link"): (0.05, 0.05, 0.05),
    ("finger", "finger_upper_holder_link"): (0.05, 0.05, 0.05),
    ("finger", "finger_upper_link"): (0.04, 0.14, 0.04),
    ("finger", "finger_middle_link"): (0.04, 0.04, 0.14),
    ("finger", "finger_lower_link"): (0.02, 0.02, 0.14),
    ("finger", "finger_tip_link"): (0.01, 0.01, 0.01),
    ("finger_with_stage", "stage_link"): (0.3, 0.3, 0.05),
    ("edu/fingeredu", "finger_base_link"): (0.2, 0.3, 0.8),
    ("edu/fingeredu", "finger_tip_link"): (0.01, 0.01, 0.01),
    ("edu/trifingeredu_stage", "table_link"): (0.71, 0.76, 0.01),
    ("edu/trifingeredu_stage", "boundary_link"): (0.56, 0.56, 0.17),
    ("pro/fingerpro", "center_link"): (0.005, 0.005, 0.005),
}


def folder_of(name: str) -> Path:
    """Return where a package lies, without importing it (it would ask for its libraries)."""
    spec = importlib.util.find_spec(name.replace("-", "_"))
    if spec is None or spec.origin is None:
        pytest.skip(f"{name} is not installed: pip install --no-deps {name}=={VERSIONS[name]}")
    if importlib.metadata.version(name) != VERSIONS[name]:
        pytest.skip(f"the facts are those of {name} {VERSIONS[name]}")
    return Path(spec.origin).parent


@cache
def survey_of(path: Path) -> MeshSurvey:
    return survey_file(path)


def facets_of(path: Path) -> Facets:
    """Read a binary STL file by its published layout, equal corners as one point."""
    record = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])
    corners = np.frombuffer(path.read_bytes(), record, offset=84)["corners"].reshape(-1, 3) + np.float32(0)
    _, first, place = np.unique(corners.view("V12").ravel(), return_index=True, return_inverse=True)
    return Facets(corners[first].astype(float), place.reshape(-1, 3))


def numbers(text: str) -> np.ndarray:
    return np.array([float(part) for part in text.split()])


def origin_of(element: ET.Element) -> Placement:
    """Return tf_link_element; roll, pitch and yaw are turns about the link's fixed x, y and z."""
    origin = element.find("origin")
    if origin is None:
        return Placement.identity()
    turns, shift = origin.get("rpy", "0 0 0"), origin.get("xyz", "0 0 0")
    return Placement(matrix_of_turns(numbers(turns)), numbers(shift))


def declared(link: ET.Element) -> Moments:
    """Return what a link declares, in its own frame: tensor elements about the origin of its inertial."""
    inertial = link.find("inertial")
    x, y, z, xy, xz, yz = (float(inertial.find("inertia").get(key)) for key in ("ixx", "iyy", "izz", "ixy", "ixz", "iyz"))
    mass = float(inertial.find("mass").get("value"))
    tensor = [[x, xy, xz], [xy, y, yz], [xz, yz, z]]
    return origin_of(inertial).place(Moments.from_inertia(mass, np.zeros(3), tensor))


def links_of(urdf: Path) -> dict[str, ET.Element]:
    return {link.get("name"): link for link in ET.parse(urdf).getroot().iter("link")}


def mesh_name(mesh: ET.Element) -> str:
    return mesh.get("filename").rpartition("/meshes/")[2].removesuffix(".stl")


@cache
def uses_of(root: Path) -> dict[str, list[tuple[ET.Element, ET.Element]]]:
    """Return for every mesh the links that have it and some mass, with the visual or collision that shows it."""
    uses: dict[str, list[tuple[ET.Element, ET.Element]]] = {}
    for urdf in sorted(root.rglob("*.urdf")):
        for link in links_of(urdf).values():
            for shown in (*link.findall("visual"), *link.findall("collision")):
                mesh = shown.find("geometry/mesh")
                if mesh is not None and link.find("inertial") is not None and declared(link).mass > 0:
                    uses.setdefault(mesh_name(mesh), []).append((link, shown))
    return uses


def weighed(survey: MeshSurvey, shown: ET.Element, mass: float) -> Moments:
    """Return a mesh as a uniform solid of the declared mass, in the frame of the link."""
    scale = numbers(shown.find("geometry/mesh").get("scale", "1 1 1"))
    return origin_of(shown).place(survey.solid.mapped(np.diag(scale), np.zeros(3))).with_mass(mass)


def centred_box(lengths: np.ndarray) -> Moments:
    return Placement(np.eye(3), [0, 0, -lengths[2] / 2]).place(Box(*lengths).moments())


def centred_cylinder(radius: float, length: float) -> Moments:
    return Placement(np.eye(3), [0, 0, -length / 2]).place(Cylinder(2 * radius, length).moments())


def stand_in(link: ET.Element) -> Moments:
    """Return the box or cylinder that stands for a link in collisions, at unit density in the link's frame."""
    shown = link.find("collision")
    box, cylinder = shown.find("geometry/box"), shown.find("geometry/cylinder")
    if box is not None:
        return origin_of(shown).place(centred_box(numbers(box.get("size"))))
    return origin_of(shown).place(centred_cylinder(float(cylinder.get("radius")), float(cylinder.get("length"))))


@pytest.mark.parametrize("name", VERDICTS)
def test_every_mesh_of_the_package_stands_in_the_table(name):
    meshes = folder_of(name) / "meshes"
    found = sorted(str(path.relative_to(meshes).with_suffix("")) for path in meshes.rglob("*.stl"))
    assert found == sorted(mesh for package, mesh, _ in MESHES if package == name)


@pytest.mark.parametrize(("name", "mesh", "verdict"), MESHES)
def test_mesh_has_the_verdict_and_the_edges_of_an_independent_count(name, mesh, verdict):
    path = folder_of(name) / "meshes" / f"{mesh}.stl"
    survey, facets = survey_of(path), facets_of(path)
    assert (survey.format, survey.triangles) == ("binary STL", len(facets.corners))
    assert survey.verdict == verdict
    assert survey.closed == directed_edges_cancel(facets) == (verdict == "closed")
    np.testing.assert_array_equal(survey.bounds, [facets.points.min(axis=0), facets.points.max(axis=0)])


@pytest.mark.parametrize(("name", "mesh"), [row[:2] for row in MESHES if row[2] == "closed"])
def test_closed_mesh_weighs_what_quadrature_over_its_facets_gives(name, mesh):
    path = folder_of(name) / "meshes" / f"{mesh}.stl"
    got, expected = survey_of(path).solid, moments_of_facets(facets_of(path))
    turn = Placement(matrix_of_turns([0.3, -1.1, 2.0]), [0.4, -0.2, 0.7])
    assert_same_body(turn.place(got.with_mass(0.47)), turn.place(expected.with_mass(0.47)), rel=1e-12)
    assert got.mass == pytest.approx(expected.mass, rel=1e-12)


@pytest.mark.parametrize(("name", "mesh"), [row[:2] for row in MESHES if row[2] == "hairline cracks"])
def test_cracked_mesh_differs_from_quadrature_over_its_facets_by_less_than_its_stated_bounds(name, mesh):
    path = folder_of(name) / "meshes" / f"{mesh}.stl"
    survey, plain = survey_of(path), moments_of_facets(facets_of(path))
    solid, round_off = survey.solid, 1e-12
    assert abs(plain.mass - solid.mass) <= survey.crack_volume + round_off * solid.mass
    assert np.linalg.norm(plain.centre - solid.centre) <= survey.crack_centre + round_off * survey.diagonal
    apart = np.abs(plain.inertia_about_centre - solid.inertia_about_centre).max()
    assert apart <= survey.crack_inertia + round_off * solid.mass * survey.diagonal**2


@pytest.mark.parametrize("name", DIFFERENCES)
def test_every_mesh_with_a_declared_inertial_is_compared(name):
    root = folder_of(name)
    there = {mesh for mesh in uses_of(root) if (root / "meshes" / f"{mesh}.stl").exists()}
    assert there == {mesh for package, mesh, _ in COMPARED if package == name}


def test_three_meshes_are_named_at_places_where_the_package_has_none():
    root = folder_of(FINGERS)
    absent = {mesh for mesh in uses_of(root) if not (root / "meshes" / f"{mesh}.stl").exists()}
    assert absent == {"stl/trifinger_table_without_border", "stl/edu/frame_wall", "stl/high_table_boundary"}


@pytest.mark.parametrize(("name", "mesh", "reason"), COMPARED)
def test_declared_inertial_is_not_that_of_the_mesh(name, mesh, reason):
    root = folder_of(name)
    survey = survey_of(root / "meshes" / f"{mesh}.stl")
    assert (survey.solid is None) == reason.startswith("no volume")
    for link, shown in uses_of(root)[mesh] if survey.solid is not None else ():
        told = declared(link)
        got = weighed(survey, shown, float(told.mass))
        apart = np.abs(got.centre - told.centre).max() / survey.diagonal
        turned = np.abs(got.inertia_about_centre - told.inertia_about_centre).max() / np.abs(told.inertia_about_centre).max()
        assert max(apart, turned) > SAME_BODY


def test_links_of_the_biped_declare_the_box_or_cylinder_of_their_collisions():
    root = folder_of(UPKIE)
    links = links_of(root / "urdf" / "upkie.urdf") | links_of(root / "urdf" / "upkie_camera.urdf")
    solid = {name: link for name, link in links.items() if link.find("collision") is not None}
    slips = {"camera_support", *(f"{side}_{bone}" for side, bone in LEG_BONES)}
    assert len(solid) > len(slips)
    for name in solid.keys() - slips:
        told = declared(solid[name])
        assert_same_body(stand_in(solid[name]).with_mass(told.mass), told, rel=1e-14)


def test_inertial_turned_a_quarter_about_y_lies_along_x_as_its_mesh_does():
    root = folder_of(UPKIE)
    link, shown = uses_of(root)["mjbots/qdd100_horn"][0]
    told, inertia = declared(link), link.find("inertial/inertia")
    along, across = float(inertia.get("izz")), float(inertia.get("ixx"))
    np.testing.assert_allclose(told.inertia_about_centre, np.diag([along, across, across]), rtol=1e-14, atol=1e-14 * across)
    mesh = weighed(survey_of(root / "meshes" / "mjbots" / "qdd100_horn.stl"), shown, float(told.mass))
    assert np.argmin(np.diag(mesh.inertia_about_centre)) == 0
    assert along < across


def test_camera_support_of_the_biped_is_declared_as_the_box_of_its_handle():
    folder = folder_of(UPKIE) / "urdf"
    told = declared(links_of(folder / "upkie_camera.urdf")["camera_support"])
    handle = centred_box(numbers(links_of(folder / "upkie.urdf")["handle"].find("collision/geometry/box").get("size")))
    assert_same_body(handle.with_mass(told.mass), told, rel=1e-14)


@pytest.mark.parametrize(("side", "bone"), LEG_BONES)
def test_femur_and_tibia_of_the_biped_are_declared_a_tenth_as_long_as_their_cylinders(side, bone):
    link = links_of(folder_of(UPKIE) / "urdf" / "upkie.urdf")[f"{side}_{bone}"]
    told, cylinder = declared(link), link.find("collision/geometry/cylinder")
    radius, length = float(cylinder.get("radius")), float(cylinder.get("length"))
    assert_same_body(centred_cylinder(radius, length / 10).with_mass(told.mass), told, rel=1e-14)
    ratio = stand_in(link).with_mass(told.mass).inertia_about_centre[0, 0] / told.inertia_about_centre[0, 0]
    assert ratio == pytest.approx((3 * radius**2 + length**2) / (3 * radius**2 + (length / 10) ** 2), rel=1e-13)


@pytest.mark.parametrize(("urdf", "link"), BOXES)
def test_link_of_the_fingers_declares_a_box_of_round_dimensions(urdf, link):
    element = links_of(folder_of(FINGERS) / "urdf" / f"{urdf}.urdf")[link]
    told = declared(element)
    box = origin_of(element.find("inertial")).place(centred_box(np.array(BOXES[urdf, link])))
    assert_same_body(box.with_mass(told.mass), told, rel=1e-14)
