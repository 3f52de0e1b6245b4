"""Outlines out of DXF and SVG files, exact where the drawing is, and each file that is refused."""

from __future__ import annotations

import builtins

import numpy as np
import pytest

from core.errors import OutlineFileError
from core.quantity import UNITS
from core.shapes import Extruded, Outline
from core.shapes.profile import circle_loop, rectangle_loop
from core.shapes.profile.drawing import MOST_BYTES, read_outline

MM = UNITS["mm"]
PLATE = Outline((rectangle_loop(0.08, 0.05, rounding=0.008), circle_loop(0.02, 0.03, 0.02)))


def drawn(tmp_path, draw) -> Outline:
    """The outline of a DXF file that draw puts entities into."""
    import ezdxf

    document = ezdxf.new()
    draw(document.modelspace(), document)
    document.saveas(tmp_path / "outline.dxf")
    return read_outline(tmp_path / "outline.dxf", MM)


def svg(tmp_path, body: str, head: str = "") -> Outline:
    (tmp_path / "outline.svg").write_text(f'{head}<svg xmlns="http://www.w3.org/2000/svg">{body}</svg>', "utf-8")
    return read_outline(tmp_path / "outline.svg", MM)


def refusal_of(call) -> OutlineFileError:
    with pytest.raises(OutlineFileError) as refusal:
        call()
    return refusal.value


def assert_same_plane(got: Outline, expected: Outline, rel: float) -> None:
    size = expected.size
    np.testing.assert_allclose(got.plane.area, expected.plane.area, rtol=rel)
    np.testing.assert_allclose(got.plane.centre, expected.plane.centre, rtol=0, atol=rel * size)
    np.testing.assert_allclose(got.plane.second, expected.plane.second, rtol=0, atol=rel * np.trace(expected.plane.second))


def plate_of_lines_and_arcs(space, _document) -> None:
    space.add_circle((30, 20), 10)
    # In no order, and some the other way round.
    space.add_line((80, 8), (80, 42))
    space.add_line((72, 0), (8, 0))
    space.add_line((0, 42), (0, 8))
    space.add_line((72, 50), (8, 50))
    for centre, start in (((72, 8), 270), ((72, 42), 0), ((8, 42), 90), ((8, 8), 180)):
        space.add_arc(centre, 8, start, start + 90)


def plate_as_polyline(space, _document) -> None:
    b = np.tan(np.pi / 8)
    corners = [(8, 0, 0), (72, 0, b), (80, 8, 0), (80, 42, b), (72, 50, 0), (8, 50, b), (0, 42, 0), (0, 8, b)]
    space.add_lwpolyline(corners, format="xyb", close=True)
    space.add_lwpolyline([(40, 20, 1), (20, 20, 1)], format="xyb", close=True)


def plate_in_a_block(space, document) -> None:
    plate_as_polyline(document.blocks.new("plate"), document)
    space.add_blockref("plate", (0, 0))


@pytest.mark.parametrize("draw", [plate_of_lines_and_arcs, plate_as_polyline, plate_in_a_block])
def test_a_plate_in_dxf_is_the_plate(tmp_path, draw):
    assert_same_plane(drawn(tmp_path, draw), PLATE, rel=1e-12)


def test_an_ellipse_and_a_spline_come_within_a_millionth(tmp_path):
    ellipse = drawn(tmp_path, lambda space, _: space.add_ellipse((0, 0), (40, 0), 0.5)).plane
    assert float(ellipse.area) == pytest.approx(np.pi * 0.04 * 0.02, rel=1e-5)
    assert float(ellipse.second[1, 1]) == pytest.approx(np.pi / 4 * 0.04 * 0.02**3, rel=1e-5)

    def half_and_chord(space, _document) -> None:
        # Bézier from (0, 0) to (30, 0) with both handles 20 above: its area is 3/5 of the rectangle of the handles.
        space.add_open_spline([(0, 0), (0, 20), (30, 20), (30, 0)])
        space.add_line((30, 0), (0, 0))

    assert float(drawn(tmp_path, half_and_chord).plane.area) == pytest.approx(0.6 * 0.03 * 0.02, rel=1e-5)


@pytest.mark.parametrize(
    "body",
    [
        '<rect width="80" height="50" rx="8"/><circle cx="30" cy="30" r="10"/>',
        ('<path d="M8 0H72A8 8 0 0 1 80 8V42A8 8 0 0 1 72 50H8A8 8 0 0 1 0 42V8A8 8 0 0 1 8 0Z'
        'M40 30A10 10 0 1 1 20 30A10 10 0 1 1 40 30Z"/>'),
        ('<g transform="translate(80 0) rotate(90)"><g transform="scale(2)">'
        '<rect width="25" height="40" rx="4"/><ellipse cx="15" cy="25" rx="5" ry="5"/></g></g>'),
    ],
)  # fmt: skip
def test_a_plate_in_svg_is_the_plate_with_y_turned_up(tmp_path, body):
    # In the file y points down: the hole at y = 30 lies 20 above the lower edge at 50.
    assert_same_plane(svg(tmp_path, body), PLATE.moved(0, -0.05), rel=1e-9)


def test_polygons_lines_and_curves_of_svg_are_read(tmp_path):
    triangle = svg(tmp_path, '<polygon points="0,0 30,0 0,-20"/>')
    assert float(triangle.plane.area) == pytest.approx(3e-4, rel=1e-14)
    lines = '<line x1="0" y1="0" x2="30" y2="0"/><polyline points="30,0 0,-20 0,0"/>'
    assert svg(tmp_path, lines).plane.area == pytest.approx(3e-4, rel=1e-14)
    bezier = svg(tmp_path, '<path d="M0 0C0 -20 30 -20 30 0Z"/>')
    assert float(bezier.plane.area) == pytest.approx(0.6 * 0.03 * 0.02, rel=1e-5)


def test_the_unit_is_the_one_that_was_said(tmp_path):
    svg(tmp_path, '<rect width="4" height="3"/>')
    inches = read_outline(tmp_path / "outline.svg", UNITS["in"])
    assert float(inches.plane.area) == pytest.approx(12 * 0.0254**2, rel=1e-14)
    assert Extruded(inches, 0.01).moments().mass > 0


def test_open_ends_are_named_and_shown(tmp_path):
    def gaping(space, _document) -> None:
        space.add_line((0, 0), (40, 0))
        space.add_line((40, 0), (40, 30))
        space.add_line((40, 30), (0, 0.5))

    refusal = refusal_of(lambda: drawn(tmp_path, gaping))
    assert str(refusal) == (
        "outline.dxf: open ends: no other line goes on at (0, 0) mm, (0, 0.5) mm. "
        "Close the outline in the drawing, and export it anew."
    )
    assert refusal.spots == ((0.0, 0.0), (0.0, 0.0005))


def test_a_line_drawn_twice_is_named(tmp_path):
    def double(space, _document) -> None:
        space.add_lwpolyline([(0, 0), (40, 0), (0, 30)], close=True)
        space.add_line((0, 0), (40, 0))

    refusal = refusal_of(lambda: drawn(tmp_path, double))
    assert "more than two lines meet at (0, 0) mm" in str(refusal)
    assert refusal.spots == ((0.0, 0.0), (0.04, 0.0))


def test_ends_that_nearly_meet_are_joined(tmp_path):
    def nearly(space, _document) -> None:
        space.add_line((0, 0), (40, 0))
        space.add_line((40.00002, 0), (40, 30))
        space.add_line((40, 30), (0, 0.00001))

    assert float(drawn(tmp_path, nearly).plane.area) == pytest.approx(6e-4, rel=2e-6)


def bomb() -> str:
    layers = "".join(f'<!ENTITY e{k} "{f"&e{k - 1};" * 10}">' for k in range(1, 10))
    return f'<!DOCTYPE svg [<!ENTITY e0 "x">{layers}]>'


@pytest.mark.parametrize(
    ("head", "body", "sentence"),
    [
        (
            bomb(), "<desc>&e9;</desc>",
            ("outline.svg: the SVG declares a document type, which could hide what it holds. "
            'Export it as plain SVG, or delete the line that begins with "<!DOCTYPE".'),
        ),
        (
            '<!DOCTYPE svg SYSTEM "file:///etc/passwd">', "",
            ("outline.svg: the SVG declares a document type, which could hide what it holds. "
            'Export it as plain SVG, or delete the line that begins with "<!DOCTYPE".'),
        ),
        ("", "<g>", "outline.svg, line 1: the file is no SVG drawing, or a damaged one. Export the drawing anew as SVG."),
        (
            "", '<use href="#a"/>',
            ("outline.svg: the drawing holds copies by reference (<use>). "
            "Turn them into lines of their own, and export anew."),
        ),
        (
            "", "<defs><rect width='3' height='2'/></defs>",
            "outline.svg: the drawing holds no lines or arcs. Export the outline as lines, arcs, polylines or curves.",
        ),
        (
            "", '<line x1="0"/>', "outline.svg: a <line> cannot be read; read 'y1'. Export the drawing anew as SVG.",
        ),
        (
            "", '<polygon points="0,0 10,10 10,0 0,10"/>',
            ("outline.svg: the outer line crosses or touches itself at (5, -5) mm: the edge from point 1 to 2 meets the "
            "edge from point 3 to 4. Put the points into the order in which the line runs, and move it apart there."),
        ),
    ],
)  # fmt: skip
def test_an_svg_that_cannot_be_taken_says_why(tmp_path, head, body, sentence):
    assert str(refusal_of(lambda: svg(tmp_path, body, head))) == sentence


@pytest.mark.parametrize("content", [b"", b"hello", b"  0\nSECTION\n  2\nENTITIES\n  0\nLINE\n 10\nwide\n", bytes(range(256))])
def test_a_damaged_dxf_is_refused(tmp_path, content):
    (tmp_path / "outline.dxf").write_bytes(content)
    refusal = refusal_of(lambda: read_outline(tmp_path / "outline.dxf", MM))
    assert refusal.where.startswith("outline.dxf")


def test_a_drawing_in_space_is_refused(tmp_path):
    refusal = refusal_of(lambda: drawn(tmp_path, lambda space, _: space.add_line((0, 0, 0), (10, 0, 5))))
    assert str(refusal) == (
        "outline.dxf: the drawing leaves its plane; read z = 5 in the file's unit. "
        "Export a plane drawing, with every z at 0."
    )


def test_other_files_large_files_and_missing_files_are_refused(tmp_path):
    assert str(refusal_of(lambda: read_outline(tmp_path / "outline.png", MM))) == (
        'outline.png: an outline is read from a DXF or SVG file; read ".png". Export the drawing as DXF.'
    )
    with (tmp_path / "large.svg").open("wb") as file:
        file.truncate(MOST_BYTES + 1)
    assert str(refusal_of(lambda: read_outline(tmp_path / "large.svg", MM))) == (
        "large.svg: a drawing of one outline has at most 20 MB; read 20.0 MB. Export the outline alone."
    )
    assert "the file cannot be read" in str(refusal_of(lambda: read_outline(tmp_path / "none.svg", MM)))


@pytest.mark.parametrize(("ending", "library"), [("dxf", "ezdxf"), ("svg", "svgpathtools")])
def test_without_the_optional_library_the_sentence_says_how_to_get_it(tmp_path, monkeypatch, ending, library):
    (tmp_path / f"outline.{ending}").write_text("<svg/>")
    real = builtins.__import__

    def without(name, *rest):
        if name.startswith(library):
            raise ImportError(name)
        return real(name, *rest)

    monkeypatch.setattr(builtins, "__import__", without)
    assert str(refusal_of(lambda: read_outline(tmp_path / f"outline.{ending}", MM))) == (
        f"outline.{ending}: reading {ending.upper()} needs the library {library}, which is not installed. "
        'Install it with "pip install masswright[outline]".'
    )
