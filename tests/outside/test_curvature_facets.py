"""Restored curvature against tessellations of boundary-representation solids with independently integrated values."""

import json
from pathlib import Path

import numpy as np
import pytest

from core.mesh.curvature import Restored, restore_triangles
from core.moments import Moments

FOLDER = Path(__file__).parents[1] / "facets"
LISTS = ("exact.json", "exact_more.json")
EXACT = {name: part for each in LISTS for name, part in json.loads((FOLDER / each).read_text())["parts"].items()}
FACET = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])


def exact(name: str) -> Moments:
    part = EXACT[name]
    inertia = np.array(part["inertia_about_centre"])
    return Moments.from_inertia(part["volume"], part["centre"], 0.5 * (inertia + inertia.T))


def errors(found: Moments, true: Moments) -> np.ndarray:
    tensor = true.inertia_about_centre
    off = np.abs(found.inertia_about_centre - tensor).max() / np.abs(tensor).max()
    return np.array([abs(float(found.mass / true.mass) - 1), off])


@pytest.fixture(scope="module")
def found() -> dict[str, Restored]:
    meshes = {name: np.frombuffer((FOLDER / f"{name}.stl").read_bytes(), FACET, offset=84)["corners"] for name in EXACT}
    return {name: restore_triangles(mesh) for name, mesh in meshes.items()}


def test_the_files_hold_the_triangles_that_their_list_says():
    for name, part in EXACT.items():
        assert (FOLDER / f"{name}.stl").stat().st_size == 84 + 50 * part["triangles"]


@pytest.mark.parametrize("name", EXACT)
def test_volume_and_inertia_of_each_solid_gain_at_least_fiftyfold(found, name):
    assert (errors(found[name].faceted, exact(name)) > 50 * errors(found[name].moments, exact(name))).all()


def test_the_median_gain_is_two_hundredfold(found):
    gains = [errors(found[name].faceted, exact(name)) / errors(found[name].moments, exact(name)) for name in EXACT]
    assert (np.median(gains, axis=0) > 200).all()


@pytest.mark.parametrize("name", EXACT)
def test_what_is_left_is_within_its_estimate(found, name):
    volume, inertia = errors(found[name].moments, exact(name))
    assert volume <= found[name].left.volume
    assert inertia <= found[name].left.inertia


@pytest.mark.parametrize("name", EXACT)
def test_the_centre_comes_within_two_hundred_thousandths_of_the_size(found, name):
    size = np.sqrt(np.trace(exact(name).spread) / exact(name).mass)
    assert np.abs(found[name].moments.centre - exact(name).centre).max() < 2e-5 * size
