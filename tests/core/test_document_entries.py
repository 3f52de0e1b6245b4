"""An entry of a document that cannot be is named with its place, in plain words; so is a mesh."""

from __future__ import annotations

from hashlib import sha256

import pytest
from documents import BY_HAND, GOOD_COPY, WEDGE, packed, refusal_after, refusal_of, saved, unpacked
from strategies import mesh_body

# --- entries -----------------------------------------------------------------------------------------------------


def plate_of(data: dict) -> dict:
    return data["members"][0]["members"][0]


def rim_of(data: dict) -> dict:
    return data["members"][0]["members"][1]


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (
            lambda data: plate_of(data)["body"]["dimensions"].update(diameter="0.4"),
            ("members[0].members[0].body.dimensions.diameter (plate): this has to be a number; read '0.4'. "
            "Give a number, without quotation marks."),
        ),
        (
            lambda data: plate_of(data)["body"]["dimensions"].update(diameter=-0.4),
            ("members[0].members[0].body (plate), cylinder: the diameter has to be more than 0; read -400 mm. "
            "Give a positive length."),
        ),
        (
            lambda data: plate_of(data)["body"]["dimensions"].update(diameter=1e31),
            ("members[0].members[0].body.dimensions.diameter (plate): this has to be at most 1e+30; read 1e+31. "
            "Give a smaller number."),
        ),
        (
            lambda data: plate_of(data)["body"]["dimensions"].update(colour=1.0),
            ("members[0].members[0].body (plate), cylinder: there is no such dimension; read colour. "
            "Choose from diameter, length."),
        ),
        (
            lambda data: plate_of(data)["body"]["dimensions"].pop("length"),
            f"members[0].members[0].body (plate), cylinder: the length is missing. {BY_HAND}",
        ),
        (
            lambda data: plate_of(data)["body"].update(shape="dodecahedral nut"),
            ("members[0].members[0].body (plate): there is no such shape in this version; read 'dodecahedral nut'. "
            "Open the document with the version of Masswright that wrote it, or a newer one."),
        ),
        (
            lambda data: plate_of(data)["body"].update(kind="cloud"),
            ("members[0].members[0].body (plate): the kind has to be one of 'shape', 'mesh', 'known tensor', "
            f"'known axial'; read 'cloud'. {BY_HAND}"),
        ),
        (
            lambda data: plate_of(data)["body"].pop("kind"),
            f"members[0].members[0].body (plate): its kind is missing. {BY_HAND}",
        ),
        (
            lambda data: plate_of(data)["driver"].update(density=-7850.0),
            "members[0].members[0].driver (plate)",
        ),
        (
            lambda data: plate_of(data).update(driver={"kind": "data sheet"}),
            ("members[0].members[0] (plate), plate: a known part takes its mass from its data sheet, and only a known "
            "part does. Give it a material, a density or a weighed mass, or make it a known part."),
        ),
        (
            lambda data: data["members"][2].update(driver={"kind": "weighed", "mass": 1.0}),
            ("members[2] (rotor), rotor: a known part takes its mass from its data sheet, and only a known part does. "
            "Give it a material, a density or a weighed mass, or make it a known part."),
        ),
        (
            lambda data: rim_of(data)["copies"].update(count=0),
            ("members[0].members[1].copies (rim): a quantity lies between 1 and 100000; read 0. "
            "Give a whole number of equal parts."),
        ),
        (
            lambda data: rim_of(data)["copies"].update(count=3.5),
            "members[0].members[1].copies.count (rim): this has to be a whole number; read 3.5. Give a whole number.",
        ),
        (
            lambda data: rim_of(data)["copies"].update(turning="yes"),
            ("members[0].members[1].copies.turning (rim): this has to be true or false; read 'yes'. "
            "Give true or false."),
        ),
        (
            lambda data: rim_of(data)["copies"].update(direction=[0.0, 0.0, 0.0]),
            ("members[0].members[1].copies (rim): a direction needs a length; read [0.0, 0.0, 0.0]. "
            "Give three numbers that are not all zero."),
        ),
        (
            lambda data: rim_of(data)["pose"].update(position=[0.0, 1.0]),
            f"members[0].members[1].pose.position[2] (rim): this entry is missing. {BY_HAND}",
        ),
        (
            lambda data: rim_of(data)["pose"].update(position=[0.0, True, 1.0]),
            ("members[0].members[1].pose.position[1] (rim): this has to be a number; read True. "
            "Give a number, without quotation marks."),
        ),
        (
            lambda data: rim_of(data).update(name="x" * 501),
            (f"members[0].members[1].name ({'x' * 60} …): this text is longer than 500 characters; "
            f"read '{'x' * 59} …. Shorten it."),
        ),
        (
            lambda data: rim_of(data).update(name="\ud800"),
            "members[0].members[1].name",
        ),
        (
            lambda data: rim_of(data).pop("note"),
            f"members[0].members[1].note (rim): this entry is missing. {BY_HAND}",
        ),
        (
            lambda data: rim_of(data).update(key="a"),
            "rim: two lines have the same key; read a.",
        ),
        (
            lambda data: data.update(members={}),
            f"members: this has to be a list; read named values. {BY_HAND}",
        ),
        (
            lambda data: data.update(author="somebody"),
            f"author: this version knows no such entry; read 'somebody'. {BY_HAND}",
        ),
        (
            lambda data: data.update(drive="Table"),
            ("drive axis: \"drive\" names an axis that is not there; read 'Table', where the axes are Spindle. "
            "Name one of them as the drive axis, or add an axis of that name."),
        ),
        (
            lambda data: data["axes"].append(data["axes"][0]),
            "axes: two axes have the same name; read 'Spindle'. Give one of them another name.",
        ),
        (
            lambda data: data["axes"][0].update(point=[1, 2, 3], second=[1, 2, 3]),
            "axes[0] (Spindle): an axis needs two points that differ; read (1.0, 2.0, 3.0) m twice. Move one of them.",
        ),
        (
            lambda data: data["axes"][0].update(direction=[0, 0, 0]),
            ("axes[0] (Spindle): a direction needs a length; read [0.0, 0.0, 0.0]. "
            "Give three numbers that are not all zero."),
        ),
        (
            lambda data: data.update(axes=[]),
            "axes: this holds fewer than 1 values; read []. " + BY_HAND,
        ),
        (
            lambda data: data["members"][2]["body"].update(tensor=[1.0] * 5),
            f"members[2].body.tensor[5] (rotor): this entry is missing. {BY_HAND}",
        ),
        (
            lambda data: data["members"][2]["body"].update(about="elbow"),
            f"members[2].body.about (rotor): this has to be 'centre' or 'origin'; read 'elbow'. {BY_HAND}",
        ),
        (
            lambda data: data["members"][1]["body"].update(metres_per_unit=0.0),
            "members[1].body.metres_per_unit (wedge): this has to be more than 0; read 0.0. Give a larger number.",
        ),
        (
            lambda data: data["members"][1]["body"].update(mesh="../../secret"),
            "members[1].body.mesh (wedge): this has to be a SHA-256 of 64 hexadecimal digits; read '../../secret'. "
            + BY_HAND,
        ),
    ],
)
def test_an_entry_that_cannot_be_is_named_with_its_place(tmp_path, change, sentence):
    said = refusal_after(tmp_path, change)
    assert said.startswith(f"dial.masswright, {sentence}") or said == f"dial.masswright: {sentence}"


def test_the_first_of_several_faults_is_named_with_their_number(tmp_path):
    def spoil(data: dict) -> None:
        plate_of(data)["pose"].update(position=["a", "b", "c"])

    assert refusal_after(tmp_path, spoil) == (
        "dial.masswright, members[0].members[0].pose.position[0] (plate): this has to be a number (the first of 3 "
        "such places); read 'a'. Give a number, without quotation marks."
    )


def test_more_bodies_than_an_assembly_holds_are_refused_before_any_is_made(tmp_path):
    def multiply(data: dict) -> None:
        data["members"][0]["copies"] = {"kind": "several", "count": 100_000}
        plate_of(data)["copies"] = {"kind": "several", "count": 100_000}

    assert refusal_after(tmp_path, multiply) == (
        "dial.masswright, plate: an assembly holds at most 1000000 bodies. Make a ring, row or quantity smaller."
    )


# --- meshes ------------------------------------------------------------------------------------------------------


def test_a_mesh_that_is_not_in_the_archive_is_refused(tmp_path):
    entries = unpacked(saved(tmp_path))
    name = f"meshes/{WEDGE.asset.sha256}.stl"
    del entries[name]
    assert refusal_of(packed(entries)) == (
        f"dial.masswright, members[1].body (wedge), {name}: this mesh is not in the archive. {GOOD_COPY}"
    )


def test_a_mesh_with_another_hash_than_it_is_filed_under_is_refused(tmp_path):
    entries = unpacked(saved(tmp_path))
    name = f"meshes/{WEDGE.asset.sha256}.stl"
    entries[name] = mesh_body((10, 20, 31), "", 1.0).asset.data
    said = refusal_of(packed(entries))
    assert said.startswith(
        f"dial.masswright, members[1].body (wedge), {name}: a mesh in the archive is not the one that was saved "
        "there; read a file with SHA-256 "
    )
    assert said.endswith(GOOD_COPY)


def test_a_damaged_mesh_is_refused_with_its_own_sentence(tmp_path):
    entries = unpacked(saved(tmp_path))
    cut = WEDGE.asset.data[:-10]
    digest = sha256(cut).hexdigest()
    entries["assembly.json"] = entries["assembly.json"].replace(WEDGE.asset.sha256.encode(), digest.encode())
    said = refusal_of(packed({**entries, f"meshes/{digest}.stl": cut}))
    assert said.startswith("dial.masswright, members[1].body (wedge), wedge.stl")
    assert "\n" not in said
    assert "facet" in said
