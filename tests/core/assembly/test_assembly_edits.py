"""Edits make a new assembly and leave the old one alone; what cannot be done is refused in a whole sentence."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from strategies import assemblies

from core.assembly import Assembly, DataSheet, DriveAxis, Group, KnownAxial, Part, ShapeBody, walk
from core.errors import EditRefused, ValueRefused
from core.material import ByDensity
from core.placement import Pose, Ring, Several
from core.shapes import Cylinder

PIN = ShapeBody(Cylinder(0.01, 0.05))
PROPERTY = settings(deadline=None, max_examples=40, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large])


def pin(key: str, x: float = 0.1) -> Part:
    return Part(key, f"pin {key}", PIN, ByDensity(7850.0), Pose((x, 0.0, 0.0)))


def two_groups() -> Assembly:
    """a, [b, [c, d]], [e], f with groups g (b and h), h (c and d) and k (e)."""
    inner = Group("h", "inner", (pin("c"), pin("d")))
    return Assembly("two", (pin("a"), Group("g", "outer", (pin("b"), inner)), Group("k", "other", (pin("e"),)), pin("f")))


def order(assembly: Assembly) -> str:
    """Return the keys in the order of the ledger, the members of a group in brackets."""

    def said(nodes: tuple) -> str:
        return "".join(f"{node.key}[{said(node.members)}]" if isinstance(node, Group) else node.key for node in nodes)

    return said(assembly.members)


@pytest.mark.parametrize(
    ("group", "index", "expected"),
    [
        (None, None, "ag[bh[cd]]k[e]fn"),
        (None, 0, "nag[bh[cd]]k[e]f"),
        (None, 1, "ang[bh[cd]]k[e]f"),
        ("g", None, "ag[bh[cd]n]k[e]f"),
        ("h", 1, "ag[bh[cnd]]k[e]f"),
        ("k", 0, "ag[bh[cd]]k[ne]f"),
    ],
)
def test_a_part_is_put_into_a_group_before_an_index(group, index, expected):
    assert order(two_groups().inserted(pin("n"), group, index)) == expected


@pytest.mark.parametrize(
    ("key", "group", "index", "expected"),
    [
        ("a", "h", 0, "g[bh[acd]]k[e]f"),
        ("c", None, None, "ag[bh[d]]k[e]fc"),
        ("h", "k", None, "ag[b]k[eh[cd]]f"),
        ("f", None, 0, "fag[bh[cd]]k[e]"),
        # Within one group the index counts the lines without the one that moves.
        ("a", None, 1, "g[bh[cd]]ak[e]f"),
        ("c", "h", 1, "ag[bh[dc]]k[e]f"),
    ],
)
def test_a_node_is_moved_with_all_it_holds(key, group, index, expected):
    before = two_groups()
    after = before.moved(key, group, index)
    assert order(after) == expected
    assert after.node(key) is before.node(key)


@pytest.mark.parametrize(
    ("keys", "expected"),
    [
        (("a",), "g[bh[cd]]k[e]f"),
        (("h",), "ag[b]k[e]f"),
        (("c", "d"), "ag[bh[]]k[e]f"),
        (("g", "c", "h"), "ak[e]f"),
        (("a", "g", "k", "f"), ""),
    ],
)
def test_nodes_are_removed_with_all_they_hold(keys, expected):
    assert order(two_groups().removed(keys)) == expected


def test_replacing_a_part_leaves_every_other_node_the_same_object():
    before = two_groups()
    after = before.replaced(replace(before.node("c"), name="longer pin"))
    assert after.node("c").name == "longer pin"
    assert order(after) == order(before)
    assert all(after.node(key) is before.node(key) for key in "abdekf")
    assert before == two_groups()


def test_the_groups_above_a_node_come_outermost_first():
    assert [group.key for group in two_groups().groups_above("d")] == ["g", "h"]
    assert two_groups().groups_above("a") == ()


def test_fresh_keys_and_names_are_not_taken():
    assembly = two_groups().inserted(replace(pin("p10"), name="pin a 2"))
    assert assembly.fresh_key() not in assembly
    assert assembly.fresh_name("pin a") == "pin a 3"
    assert assembly.fresh_name("washer") == "washer"


@pytest.mark.parametrize(
    ("edit", "sentence"),
    [
        (lambda a: a.node("x"), "the assembly has no such line; read x."),
        (lambda a: a.removed(("a", "x")), "the assembly has no such line; read x."),
        (lambda a: a.replaced(pin("x")), "the assembly has no such line; read x."),
        (lambda a: a.inserted(pin("n"), "x"), "the assembly has no such line; read x."),
        (lambda a: a.inserted(pin("a")), "pin a: two lines have the same key; read a."),
        (lambda a: a.inserted(pin("n"), "a"), "pin a: only a group holds other parts. Choose a group, or add one."),
        (lambda a: a.moved("g", "h"), "outer: a group cannot be put into itself."),
        (lambda a: a.moved("g", "g"), "outer: a group cannot be put into itself."),
        (
            lambda a: replace(a, drive="Table"),
            ("drive axis: \"drive\" names an axis that is not there; read 'Table', where the axes are Spindle. "
            "Name one of them as the drive axis, or add an axis of that name."),
        ),
        (
            lambda a: replace(a, axes=(DriveAxis(), DriveAxis())),
            "axes: two axes have the same name; read 'Spindle'. Give one of them another name.",
        ),
        (
            lambda a: replace(a, axes=()),
            ("drive axis: \"drive\" names an axis that is not there; read 'Spindle', where the axes are none. "
            "Name one of them as the drive axis, or add an axis of that name."),
        ),
        (
            lambda _: replace(pin("a"), driver=DataSheet()),
            ("pin a: a known part takes its mass from its data sheet, and only a known part does. "
            "Give it a material, a density or a weighed mass, or make it a known part."),
        ),
        (
            lambda _: replace(pin("a"), body=KnownAxial(1.0, (0, 0, 0), 0.1)),
            ("pin a: a known part takes its mass from its data sheet, and only a known part does. "
            "Give it a material, a density or a weighed mass, or make it a known part."),
        ),
    ],
)
def test_an_edit_that_cannot_be_is_refused_in_a_whole_sentence(edit, sentence):
    with pytest.raises(EditRefused) as refusal:
        edit(two_groups())
    assert str(refusal.value) == sentence
    assert isinstance(refusal.value, ValueError)


def test_groups_nest_thirty_one_deep_and_no_deeper():
    node = pin("a")
    for depth in range(31):
        node = Group(f"g{depth}", f"group {depth}", (node,))
    assembly = Assembly("deep", (node,))
    assert len(assembly.groups_above("a")) == 31
    with pytest.raises(EditRefused) as refusal:
        Assembly("deeper", (Group("top", "top", (node,)),))
    assert str(refusal.value) == "pin a: groups nest at most 32 deep."


def test_more_than_a_million_bodies_are_refused_when_the_assembly_is_made():
    bolts = Group("g", "bolts", (replace(pin("a"), copies=Ring(1000)),), copies=Several(1000))
    assert Assembly("a million", (bolts,)).drive == "Spindle"
    with pytest.raises(EditRefused) as refusal:
        Assembly("more", (bolts, pin("b")))
    assert str(refusal.value) == (
        "pin b: an assembly holds at most 1000000 bodies. Make a ring, row or quantity smaller."
    )


def test_an_axis_without_a_direction_is_refused():
    with pytest.raises(ValueRefused) as refusal:
        DriveAxis("Spindle", direction=(0.0, 0.0, 0.0))
    assert str(refusal.value) == (
        "a direction needs a length; read [0.0, 0.0, 0.0]. Give three numbers that are not all zero."
    )


@given(assemblies(), st.data())
@PROPERTY
def test_inserting_and_removing_gives_the_same_assembly_again(assembly, data):
    groups = [None, *(node.key for node, _ in walk(assembly.members) if isinstance(node, Group))]
    group = data.draw(st.sampled_from(groups))
    new = pin(assembly.fresh_key())
    assert assembly.inserted(new, group, data.draw(st.integers(0, 3))).removed((new.key,)) == assembly


@given(assemblies(), st.data())
@PROPERTY
def test_moving_a_node_keeps_every_key_and_moving_it_back_gives_the_same_assembly(assembly, data):
    nodes = [node for node, _ in walk(assembly.members)]
    if not nodes:
        return
    node = data.draw(st.sampled_from(nodes))
    target = data.draw(st.sampled_from([None, *(other.key for other in nodes if isinstance(other, Group))]))
    above = assembly.groups_above(node.key)
    held = above[-1].members if above else assembly.members
    if target in {inner.key for inner, _ in walk((node,))}:
        with pytest.raises(EditRefused, match="a group cannot be put into itself"):
            assembly.moved(node.key, target)
        return
    after = assembly.moved(node.key, target)
    assert sorted(inner.key for inner, _ in walk(after.members)) == sorted(inner.key for inner in nodes)
    back = after.moved(node.key, above[-1].key if above else None, held.index(node))
    assert back == assembly


@given(assemblies())
@PROPERTY
def test_an_edit_leaves_the_old_assembly_and_its_numbers_as_they_were(assembly):
    before = assembly.total.inertia_about_point((0, 0, 0)).copy()
    after = assembly.inserted(pin(assembly.fresh_key(), 0.3))
    np.testing.assert_array_equal(assembly.total.inertia_about_point((0, 0, 0)), before)
    assert len(after.table.owner) == len(assembly.table.owner) + 1
