"""The command masswright: opens the window, weighs meshes and documents, hands values over."""

from __future__ import annotations

import argparse
import gc
import os
import sys
from functools import partial
from typing import TYPE_CHECKING, Final, NoReturn

from app.terminal import PROGRAM, complain, drop_output, show
from core.errors import FileRefused, MasswrightError

if TYPE_CHECKING:
    from collections.abc import Sequence

    from app.weigh import Task
    from core.handover import SheetChoice
    from core.handover.lines import About
    from core.handover.mesh_reading import Weighing
    from core.quantity import Unit, UnitSet

_LARGEST: Final = 1e15  # kg, kg/m³ or m
INTERRUPTED, NO_READER = 130, 141  # what a shell reports for a program ended by Ctrl-C, or by a closed pipe

_WIDTH: Final = 100
# Allocations before a collection, and collections of each generation before one of the next.
RARE_COLLECTIONS: Final = (100_000, 50, 50)
_OPENING: Final = """\
masswright [FILE]               open the window, with a document or with a mesh to import
masswright weigh PATH...        print the mass properties of meshes and documents
masswright handover DOC --to F  write a document's sheet to a file
"""
_ABOUT_WEIGH: Final = """\
Prints volume, mass, centre of mass, inertia tensor and principal axes of meshes and of documents.
Meshes are STL (also gzip'ed), OBJ, PLY, OFF, 3MF and GLB files.

Exit status: 0 all answered and sound; 1 answered, but a check failed; 2 wrong usage; 3 a file that cannot
be read. With several paths one bad file does not stop the others, and the highest status is returned.
"""
# Their values may begin with a minus sign, which must not be taken for an option.
_SIGNED: Final = ("--axis", "--about")


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command with arguments (those of the process by default) and return its exit status."""
    # A document is hundreds of thousands of values that all stay: looking for garbage among them took half the time.
    gc.set_threshold(*RARE_COLLECTIONS)
    given = list(sys.argv[1:] if arguments is None else arguments)
    try:
        status = _run(given)
        sys.stdout.flush()
    except BrokenPipeError:
        drop_output()
        return NO_READER
    except KeyboardInterrupt:
        return INTERRUPTED
    except SystemExit as ended:  # how argparse leaves after --help or wrong usage
        return ended.code if isinstance(ended.code, int) else 2
    return status


def _run(given: list[str]) -> int:
    command = given[0] if given else ""
    try:
        if command == "weigh":
            return _weigh(_signed_values_joined(given[1:]))
        if command == "handover":
            return _hand_over(_signed_values_joined(given[1:]))
        return _open(given)
    except FileRefused as refused:
        complain(str(refused))
        return 3
    except MasswrightError as refused:
        complain(str(refused))
        return 2


class _Parser(argparse.ArgumentParser):
    """A parser that says what is wrong in one line."""

    def __init__(self, name: str, **words: str) -> None:
        # A fixed width: asking the terminal takes modules that cost as much as reading a small mesh.
        shape = partial(argparse.RawDescriptionHelpFormatter, width=_WIDTH)
        super().__init__(name, formatter_class=shape, **words)  # type: ignore[arg-type]  # any callable will do

    def print_help(self, file: object = None) -> None:  # noqa: ARG002  # argparse's own signature
        """Write the help in signs that the terminal knows."""
        show(self.format_help())

    def error(self, message: str) -> NoReturn:
        complain(f"{message}. See {self.prog} --help")
        raise SystemExit(2)


def _open(given: list[str]) -> int:
    parser = _Parser(
        PROGRAM,
        usage=f"{PROGRAM} [FILE] | weigh PATH... | handover DOC --to FILE",
        description="Mass, centre of mass and inertia of rotating assemblies, for choosing their drive.",
        epilog=_OPENING,
    )
    parser.add_argument("file", nargs="?", metavar="FILE", help="a document, or a mesh to import")
    parser.add_argument("--version", action="store_true", help="print the version and leave")
    chosen = parser.parse_args(given)
    if chosen.version:
        show(f"{PROGRAM} {_version()}\n")
        return 0
    if not _has_display():
        return _without_window(chosen.file)
    from app.window.main import open_window

    return open_window(chosen.file)


def _without_window(file: str | None) -> int:
    """Say that there is no display, and print what can be printed without one."""
    if file is None:
        complain(f'there is no display to open a window on. For values as text use "{PROGRAM} weigh PATH..."')
        return 0
    complain(f"there is no display to open a window on; this is the sheet of {file}")
    from app.weigh import UNREADABLE, weigh

    status = weigh([file], _task(_weigh_parser().parse_args(["--", file])))
    return status if status == UNREADABLE else 0


def _has_display() -> bool:
    if not sys.platform.startswith(("linux", "freebsd")):
        return True
    return any(os.environ.get(name) for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"))


def _version() -> str:
    from importlib.metadata import PackageNotFoundError, version

    try:
        return version(PROGRAM)
    except PackageNotFoundError:
        return "(not installed)"


def _weigh(given: list[str]) -> int:
    from app.weigh import weigh

    chosen = _weigh_parser().parse_args(given)
    return weigh(chosen.paths, _task(chosen), chosen.jobs)


def _weigh_parser() -> argparse.ArgumentParser:
    parser = _Parser(f"{PROGRAM} weigh", description=_ABOUT_WEIGH)
    parser.add_argument("paths", nargs="+", metavar="PATH", help="an STL file or a document")
    mesh = parser.add_argument_group("for meshes")
    mesh.add_argument("--unit", choices=("mm", "cm", "m", "in", "ft"), help="the meshes' length unit (default: mm)")
    mass = mesh.add_mutually_exclusive_group()
    mass.add_argument("--material", metavar="NAME", help='what they are made of, such as "steel"')
    mass.add_argument("--density", metavar="TEXT", help='such as "7850 kg/m^3"')
    mass.add_argument("--mass", metavar="TEXT", help='of each, as weighed, such as "1.2 kg"')
    mesh.add_argument("--curved", action="store_true", help="count the curvature restored behind the facets")
    mesh.add_argument(
        "--axis",
        metavar="POINT;DIRECTION",
        help='also J about this axis, such as "0,0,0;0,0,1"; point in --unit. '
        "For a document it takes the place of the drive axis, in mm",
    )
    mesh.add_argument("--jobs", type=_count, default=1, metavar="N", help="work on N files at the same time")
    _add_shown(parser)
    shown = parser.add_argument_group("output")
    shown.add_argument("--format", choices=("text", "json", "tsv", "csv"), default="text", help="(default: text)")
    return parser


def _add_shown(parser: argparse.ArgumentParser) -> None:
    shown = parser.add_argument_group("what is shown (JSON is always in SI, about the centre, in tensor elements)")
    shown.add_argument(
        "--about",
        default="centre",
        metavar="POINT",
        help='point of the tensor: centre (default), origin, or "x,y,z" in --unit',
    )
    shown.add_argument(
        "--products",
        choices=("tensor", "integral"),
        default="tensor",
        help="products of inertia as tensor elements, Ixy = -∫xy dm (default), or integrals, Pxy = +∫xy dm",
    )
    shown.add_argument("--show-units", metavar="UNITS", help='such as "mm kg kg*cm^2" or "in lb lb*in^2"')
    shown.add_argument(
        "--decimal",
        choices=(".", ","),
        default=".",
        metavar="MARK",
        help='decimal mark of text and tables, "." (default) or ","',
    )


def _count(text: str) -> int:
    if not text.isdecimal() or int(text) < 1:
        raise argparse.ArgumentTypeError(f"{text!r} is no whole number of at least 1")
    return int(text)


def _task(chosen: argparse.Namespace) -> Task:
    """Return what the options of weigh ask for.

    Raises:
        ValueRefused: an option's text is no quantity, point, axis, unit or material.

    """
    from app.weigh import Task
    from core.handover.lines import AxisLine, axis_words
    from core.handover.mesh_reading import MeshRequest
    from core.quantity import UNITS, parse_axis

    unit = UNITS[chosen.unit or "mm"]
    axis = None
    if chosen.axis is not None:
        point, direction = parse_axis(chosen.axis, unit, where="--axis")
        for part in point:
            _within(part, "--axis")
        axis = AxisLine(f"the axis {axis_words(point, direction, unit)}", point, direction)
    request = MeshRequest(
        unit,
        chosen.unit is None,
        _weighing(chosen),
        axis,
        count_restored=chosen.curved,
        count_shells=chosen.format == "json",
        how_to_weigh="give --material, --density or --mass",
    )
    options = ("unit", "material", "density", "mass", "curved")
    mesh_only = tuple(f"--{name}" for name in options if getattr(chosen, name) not in {None, False})
    choice, units = _shown(chosen, unit)
    return Task(request, choice, units, chosen.format, chosen.decimal, mesh_only)


def _shown(chosen: argparse.Namespace, unit: Unit) -> tuple[SheetChoice, UnitSet]:
    from core.handover import SheetChoice
    from core.quantity import DEFAULT_UNITS, parse_triple, parse_unit_set

    words: dict[str, About] = {"centre": "centre", "center": "centre", "origin": "origin"}
    about = words.get(chosen.about) or parse_triple(chosen.about, unit, where="--about")
    asked = chosen.show_units
    units = DEFAULT_UNITS if asked is None else parse_unit_set(asked, where="--show-units")
    return SheetChoice(about, "document", chosen.products), units


def _weighing(chosen: argparse.Namespace) -> Weighing | None:
    if chosen.material is None and chosen.density is None and chosen.mass is None:
        return None
    from core.material import ByDensity, ByMaterial, Weighed
    from core.quantity import Kind, parse

    if chosen.material is not None:
        return ByMaterial.named(chosen.material)
    if chosen.density is not None:
        return ByDensity(_within(parse(chosen.density, Kind.DENSITY, where="--density").value, "--density"))
    return Weighed(_within(parse(chosen.mass, Kind.MASS, where="--mass").value, "--mass"))


def _within(value: float, option: str) -> float:
    """Return a value in SI that moments of inertia can be formed with."""
    from core.errors import ValueRefused

    if abs(value) > _LARGEST:
        raise ValueRefused(
            "the value is too large for any machine", where=option, read=f"{value:.3g} in SI units",
            remedy="Correct the number or its unit",
        )
    return value


def _hand_over(given: list[str]) -> int:
    from app.hand_over import hand_over
    from core.quantity import UNITS

    parser = _Parser(f"{PROGRAM} handover", description="Writes a document's sheet to a file: .csv, .tsv or .json.")
    parser.add_argument("document", metavar="DOC", help="a document")
    parser.add_argument("--to", required=True, metavar="FILE", help="what to write; its ending says the form")
    _add_shown(parser)
    chosen = parser.parse_args(given)
    choice, units = _shown(chosen, UNITS["mm"])
    return hand_over(chosen.document, chosen.to, choice, units, chosen.decimal)


def _signed_values_joined(given: list[str]) -> list[str]:
    """Return the arguments with "--axis" "-1,0,0;…" as one word, so that the minus sign begins no option."""
    joined: list[str] = []
    for word in given:
        if joined and joined[-1] in _SIGNED and "--" not in joined[:-1]:
            joined[-1] += f"={word}"
        else:
            joined.append(word)
    return joined
