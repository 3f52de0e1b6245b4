"""The wheel with spokes."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike, FloatArray
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.joining import together
from core.shapes.marks import ABOVE, IN_PLACE, NEAR, OTHER_SIDE, Mark, across, along_z, leader, span
from core.shapes.round_surface import turned_surface

# Two opposite spokes are the only number whose second moments differ along x and y.
_PAIR = 2


@register
@dataclass(frozen=True)
class SpokedWheel(Shape):
    """A hub and a rim about z, joined by n straight spokes of elliptical section. Lengths (...) in m.

    Hub, spokes and rim have one mid-plane; the wheel stands on z = 0 with the wider of hub and rim. The first
    spoke lies along +x. A spoke ends flat at the outer diameter of the hub and at the inner one of the rim.
    """

    key: ClassVar[str] = "spoked wheel"
    title: ClassVar[str] = "spoked wheel"
    note: ClassVar[str] = (
        "Spokes are straight bars of elliptical section that end flat at the hub's and the rim's diameter; "
        "fillets are left out."
    )
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("rim_diameter", "outer diameter of the rim", 0.4, symbol="⌀D"),
        Dimension("rim_inner_diameter", "inner diameter of the rim", 0.34, symbol="⌀d"),
        Dimension("rim_width", "width of the rim", 0.05, symbol="B"),
        Dimension("hub_diameter", "outer diameter of the hub", 0.08, symbol="⌀H"),
        Dimension("bore", "bore", 0.03, symbol="⌀b", may_be_zero=True),
        Dimension("hub_length", "length of the hub", 0.06, symbol="L"),
        Dimension("spokes", "number of spokes", 6, "count", "n", least=2, most=500),
        Dimension("spoke_width", "spoke along the axis", 0.03, symbol="w"),
        Dimension("spoke_thickness", "spoke across the axis", 0.02, symbol="t"),
    )

    rim_diameter: ArrayLike
    rim_inner_diameter: ArrayLike
    rim_width: ArrayLike
    hub_diameter: ArrayLike
    bore: ArrayLike
    hub_length: ArrayLike
    spokes: ArrayLike
    spoke_width: ArrayLike
    spoke_thickness: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, what leaves no rim, hub or room for the spokes.

        Raises:
            ShapeError: bore, hub and rim do not follow each other outwards, or a spoke finds no room at the hub.
        """
        super().check()
        names = [
            ("bore", "hub_diameter"),
            ("hub_diameter", "rim_inner_diameter"),
            ("rim_inner_diameter", "rim_diameter"),
        ]
        words = {one.name: one.label for one in self.dimensions}
        for inner, outer in names:
            small, large = self.array(inner), self.array(outer)
            sentence = f"the {words[inner]} {{}} is not less than the {words[outer]} {{}}"
            self.refuse_where(small >= large, sentence, small, large, remedy="Make the one smaller or the other larger")
        width, least = self.array("spoke_width"), np.minimum(self.array("hub_length"), self.array("rim_width"))
        self.refuse_where(
            width > least,
            "a spoke {} along the axis is wider than the hub or the rim ({})",
            width, least, remedy="Make the spokes narrower",
        )
        thick, most = self.array("spoke_thickness"), self._room()
        self.refuse_where(
            thick > most,
            "spokes {} thick pass through each other at the hub, where there is room for {}",
            thick, most, remedy="Make them thinner or fewer, or the hub larger",
        )

    def _room(self) -> FloatArray:
        """Return how thick a spoke can be at the hub, m: the side of the polygon about it, or its diameter."""
        n, hub = self.array("spokes"), self.array("hub_diameter")
        return np.asarray(hub * np.minimum(np.tan(np.pi / np.maximum(n, _PAIR + 1)), 1.0))

    def moments(self) -> Moments:
        """Return the moments at unit density: of two tubes and n elliptical bars, about the common centre.

        A bar from radius p to q has the mean squares (p² + p·q + q²)/3 outwards, t²/16 across and w²/16 along z.
        """
        hub = _tube(self.array("hub_diameter"), self.array("bore"), self.array("hub_length"))
        rim = _tube(self.array("rim_diameter"), self.array("rim_inner_diameter"), self.array("rim_width"))
        p, q = self.array("hub_diameter") / 2, self.array("rim_inner_diameter") / 2
        n, w, t = self.array("spokes"), self.array("spoke_width"), self.array("spoke_thickness")
        bars = n * np.pi / 4 * w * t * (q - p)
        outwards, across = (p**2 + p * q + q**2) / 3, t**2 / 16
        share = np.where(n == _PAIR, 1.0, 0.5)
        spokes_x = bars * (share * outwards + (1 - share) * across)
        spokes_y = bars * ((1 - share) * outwards + share * across)
        volume = hub[0] + rim[0] + bars
        squares = (
            (hub[1] + rim[1] + spokes_x) / volume,
            (hub[1] + rim[1] + spokes_y) / volume,
            (hub[2] + rim[2] + bars * w**2 / 16) / volume,
        )
        return upright_moments(volume, self._middle(), squares)

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        value, middle = self.values(), float(self._middle())
        rim, hub = value["rim_width"] / 2, value["hub_length"] / 2
        along, thick = value["spoke_width"] / 2, value["spoke_thickness"] / 2
        out = (value["hub_diameter"] + value["rim_inner_diameter"]) / 4
        turn = 2 * np.pi / value["spokes"]
        outwards, sidewards = np.array([np.cos(turn), np.sin(turn), 0]), np.array([-np.sin(turn), np.cos(turn), 0])
        second = out * outwards + np.array([0, 0, middle])
        return (
            across("rim_diameter", value["rim_diameter"], middle - rim),
            across("rim_inner_diameter", value["rim_inner_diameter"], middle + rim, ABOVE),
            along_z("rim_width", (middle - rim, middle + rim), value["rim_diameter"] / 2),
            across("hub_diameter", value["hub_diameter"], middle + hub, ABOVE),
            across("bore", value["bore"], middle + hub, ABOVE),
            along_z("hub_length", (middle - hub, middle + hub), value["hub_diameter"] / 2, OTHER_SIDE),
            leader("spokes", -second + [0, 0, 2 * middle + along], NEAR),
            span("spoke_width", (out, 0, middle - along), (out, 0, middle + along), IN_PLACE),
            span("spoke_thickness", second - thick * sidewards, second + thick * sidewards, IN_PLACE),
        )

    def facets(self, steps: int = 48) -> Facets:
        """Return hub, rim and spokes as closed surfaces, in m, all points on the true surface."""
        value, middle = self.values(), float(self._middle())
        hub = _tube_surface(value["bore"], value["hub_diameter"], value["hub_length"], steps)
        rim = _tube_surface(value["rim_inner_diameter"], value["rim_diameter"], value["rim_width"], steps)
        p, q = value["hub_diameter"] / 2, value["rim_inner_diameter"] / 2
        bar = turned_surface([(0, p), (0.5, p), (0.5, q), (0, q)], steps)
        # The bar stands along z: its z becomes the way out, its x the wheel's −z.
        across, along, outwards = bar.points.T * [[value["spoke_thickness"]], [value["spoke_width"]], [1.0]]
        surfaces = [hub, rim]
        for k in range(int(value["spokes"])):
            angle = 2 * np.pi * k / value["spokes"]
            x = outwards * np.cos(angle) - across * np.sin(angle)
            y = outwards * np.sin(angle) + across * np.cos(angle)
            surfaces.append(Facets(np.stack([x, y, along], axis=-1), bar.corners))
        whole = together(surfaces)
        return Facets(whole.points + np.array([0, 0, middle]), whole.corners)

    def _middle(self) -> FloatArray:
        """Return the height of the mid-plane (...) m above the lower face."""
        return np.asarray(np.maximum(self.array("hub_length"), self.array("rim_width")) / 2)


def _tube(outer: FloatArray, bore: FloatArray, length: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return volume (m³) and, about the centre, ∫x² dV = ∫y² dV and ∫z² dV (m⁵) of a tube."""
    volume = np.pi / 4 * (outer - bore) * (outer + bore) * length
    return volume, volume * (outer**2 + bore**2) / 16, volume * length**2 / 12


def _tube_surface(inner: float, outer: float, length: float, steps: int) -> Facets:
    half = length / 2
    return turned_surface([(inner / 2, -half), (outer / 2, -half), (outer / 2, half), (inner / 2, half)], steps)
