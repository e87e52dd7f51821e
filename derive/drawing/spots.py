"""The place of an item in columns and rows, and at which height one stands that has room to spare."""

from __future__ import annotations

from dataclasses import dataclass, replace

from derive.drawing.scene import Item, Scene
from derive.drawing.stance import Stance
from derive.drawing.symbols import Pose

SKY = 1000.0  # above every row
GROUND_ROWS = 0.7  # what a ground symbol takes below its pin
_HIGH = 3.0  # the row of what lies between two supplies


@dataclass(frozen=True, slots=True)
class Spot:
    """An item's place: its column, the row of its middle, and its pose.

    `grounded_at` is the row of the ground symbol under an item that stands on ground.
    """

    column: int
    row: float
    pose: Pose
    grounded_at: float | None = None


def middle_row(
    item: Item, bottom: float, top: float, grounded: float | None, crossed: dict[float, int]
) -> float:
    """Give the row of the middle of an item that stands between two rows: near the signal's node.

    Given: `grounded` is the row of a ground symbol below; `crossed` the rows along which wires may come,
    with what it costs to stand in their way.
    """
    if top >= SKY:
        return bottom + 2 if bottom > -SKY else _HIGH
    if grounded is None:
        return top - 1 if bottom <= -SKY else top - 1 - (top - bottom - 2) // 2
    room = top - grounded - 2
    if item.look.endswith("drive"):
        return top - 1 - room // 2
    wanted = top - 1 - min(1, room // 2)

    def cost(middle: float) -> tuple[float, float]:
        in_the_way = sum(weight for row, weight in crossed.items() if abs(row - middle) <= 1)
        return in_the_way, abs(middle - wanted)

    return min((top - 1 - k for k in range(int(room) + 1)), key=cost)


def hung_level(scene: Scene, stance: Stance, spots: dict[str, Spot]) -> dict[str, Spot]:
    """Give the places with all that hangs on a supply above at one height, so that it forms a line."""
    hung = [
        item.name
        for item in scene.items
        if item.name in stance.upper and item.node(stance.upper[item.name]) in scene.top
    ]
    highest = max((spots[name].row for name in hung), default=0.0)
    return spots | {name: replace(spots[name], row=highest) for name in hung}
