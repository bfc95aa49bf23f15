"""Where keys lead in a grid of cells: the step to a neighbour, the round inside a block, the jump to an edge."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from enum import Enum

Cell = tuple[int, int]


class Step(Enum):
    """Where to go from a cell, as (rows, columns)."""

    DOWN = (1, 0)
    UP = (-1, 0)
    RIGHT = (0, 1)
    LEFT = (0, -1)


@dataclass(frozen=True)
class CellRange:
    """A rectangle of cells; `bottom` and `right` belong to it."""

    top: int
    left: int
    bottom: int
    right: int

    @property
    def rows(self) -> range:
        """The rows of the rectangle."""
        return range(self.top, self.bottom + 1)

    @property
    def sections(self) -> range:
        """The columns of the rectangle, by place."""
        return range(self.left, self.right + 1)

    @property
    def is_one_cell(self) -> bool:
        """Whether the rectangle is a single cell."""
        return self.top == self.bottom and self.left == self.right

    def holds(self, cell: Cell) -> bool:
        """Whether `cell` lies in the rectangle."""
        return cell[0] in self.rows and cell[1] in self.sections

    def corner_opposite(self, cell: Cell) -> Cell:
        """Give the corner that stays where it is while the selection is extended from `cell`."""
        return (
            self.bottom if cell[0] == self.top else self.top,
            self.right if cell[1] == self.left else self.left,
        )

    @classmethod
    def between(cls, one: Cell, other: Cell) -> CellRange:
        """Give the rectangle with these two cells as opposite corners."""
        top, bottom = sorted((one[0], other[0]))
        left, right = sorted((one[1], other[1]))
        return cls(top, left, bottom, right)


def step_within(block: CellRange, cell: Cell, step: Step) -> Cell:
    """Go to the next cell of a block, down its columns or along its rows, and from its end back to its start."""
    height, width = len(block.rows), len(block.sections)
    down, right = cell[0] - block.top, cell[1] - block.left
    if step in (Step.DOWN, Step.UP):
        right, down = divmod((right * height + down + step.value[0]) % (height * width), height)
    else:
        down, right = divmod((down * width + right + step.value[1]) % (height * width), width)
    return (block.top + down, block.left + right)


def cells_ahead(cell: Cell, step: Step, *, rows: int, sections: int) -> Sequence[Cell]:
    """Give the cells from the neighbour of `cell` to the table's edge."""
    row, section = cell
    if step in (Step.DOWN, Step.UP):
        ahead = range(row + 1, rows) if step is Step.DOWN else range(row - 1, -1, -1)
        return [(place, section) for place in ahead]
    ahead = range(section + 1, sections) if step is Step.RIGHT else range(section - 1, -1, -1)
    return [(row, place) for place in ahead]


def edge_of_run(cell: Cell, ahead: Sequence[Cell], is_filled: Callable[[Cell], bool]) -> Cell:
    """Find where a jump stops: at the end of a run of filled cells, or at the start of the next one, or at the edge."""
    if not ahead:
        return cell
    if is_filled(cell) and is_filled(ahead[0]):
        last = cell
        for place in ahead:
            if not is_filled(place):
                return last
            last = place
        return last
    return next((place for place in ahead if is_filled(place)), ahead[-1])
