"""Material taken out of a part: bores, pockets, slots, rings of holes, each a solid placed in the part's frame."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from core.assembly.bodies import KnownAxial, KnownTensor
from core.errors import EditRefused
from core.placement import Copies, Placement, Pose, Several

if TYPE_CHECKING:
    from core.assembly.bodies import Body
    from core.shapes import Shape

# A part with more holes than this is refused: how they lie to one another is looked at in pairs.
MOST_CUT_COPIES = 2_000


@dataclass(frozen=True)
class Cut:
    """A solid that is taken out of a part, once or several times.

    Attributes:
        key: its identity in the document, different from that of every part, group and other cut.
        name: as shown ("bore ⌀60").
        shape: what is taken out; a single solid, with a volume.
        pose: of the shape's frame in the part frame.
        copies: how often it is taken out and where; a ring or row stands in the part frame.
        typed: what the user typed for a number, by field.
        note: free text.

    Raises:
        EditRefused: the shape has no volume.
        ShapeError: the shape is a batch.
    """

    key: str
    name: str
    shape: Shape
    pose: Pose = Pose()
    copies: Copies = Several(1)
    typed: tuple[tuple[str, str], ...] = ()
    note: str = ""

    def __post_init__(self) -> None:
        if self.shape.measure != "volume":
            raise EditRefused(
                "only a solid can be taken out of a part", where=self.name, read=self.shape.title,
                remedy="Choose a shape that has a volume",
            )
        self.shape.values()  # refuses a batch

    @cached_property
    def standing(self) -> Placement:
        """Placements tf_part_cut of all copies, a batch (n,)."""
        return self.copies.placements(self.pose.placement)


def check_cuts(body: Body, cuts: tuple[Cut, ...], name: str) -> None:
    """Refuse cuts in a body that nothing can be taken out of, and more of them than are looked at.

    Raises:
        EditRefused: the body is known by its data sheet or has no volume, two cuts have the same key, or there
            are more than MOST_CUT_COPIES copies.
    """
    if not cuts:
        return
    if isinstance(body, KnownTensor | KnownAxial):
        raise EditRefused(
            "nothing can be cut out of a known part: its data sheet gives the values of the finished one", where=name,
            read=f"the cut {cuts[0].name}", remedy="Leave the cut out, or make the part from a shape or a mesh",
        )
    if body.measure != "volume":
        raise EditRefused(
            "nothing can be cut out of a body without thickness", where=name, read=f"the cut {cuts[0].name}",
            remedy="Leave the cut out, or make the part from a solid",
        )
    keys = [cut.key for cut in cuts]
    if len(set(keys)) != len(keys):
        raise EditRefused("two cuts have the same key", where=name, read=", ".join(keys))
    count = sum(cut.copies.count for cut in cuts)
    if count > MOST_CUT_COPIES:
        raise EditRefused(
            f"at most {MOST_CUT_COPIES} cuts are taken out of one part", where=name, read=str(count),
            remedy="Make a ring or row of cuts smaller",
        )
