"""Contours: the part of a grid below zero, as closed paths."""

import re

import numpy as np
import pytest

from reglint.pictures.contour import below_zero
from reglint.pictures.plot import Axis, Plot
from reglint.pictures.scale import Scale

PLOT = Plot(
    "p", Axis("x", Scale(0.0, 10.0, 0.0, 10.0), str), Axis("y", Scale(0.0, 10.0, 0.0, 10.0), str)
)
GRID = np.linspace(0.0, 10.0, 11)


def area(path: str) -> float:
    """Return the area inside closed paths, by the shoelace formula."""
    total = 0.0
    for piece in path.split("Z")[:-1]:
        numbers = [float(each) for each in re.findall(r"-?[\d.]+", piece)]
        corners = list(zip(numbers[::2], numbers[1::2], strict=True))
        turned = zip(corners, (*corners[1:], corners[0]), strict=True)
        total += abs(sum(x1 * y2 - x2 * y1 for (x1, y1), (x2, y2) in turned)) / 2.0
    return total


def test_a_half_plane_is_cut_between_grid_points() -> None:
    """Below x = 3.4 lie 34 of 100 square units."""
    field = np.tile(GRID - 3.4, (11, 1))
    assert area(below_zero(PLOT, GRID, GRID, field)) == pytest.approx(34.0)


def test_a_slanted_border_is_straight() -> None:
    """Below x + y = 10 lies half of the square."""
    field = GRID[None, :] + GRID[:, None] - 10.0
    assert area(below_zero(PLOT, GRID, GRID, field)) == pytest.approx(50.0, abs=0.5)


def test_whole_cells_are_joined() -> None:
    """Where all is negative, each row is one piece."""
    path = below_zero(PLOT, GRID, GRID, np.full((11, 11), -1.0))
    assert path.count("M") == 10
    assert area(path) == pytest.approx(100.0)


def test_where_nothing_is_negative_nothing_is_drawn() -> None:
    """Zero itself is on the safe side."""
    assert below_zero(PLOT, GRID, GRID, np.zeros((11, 11))) == ""
