"""Pictures of Newton polygons: corners where they belong, slopes written, well formed."""

import re
import xml.etree.ElementTree as ElementTree
from itertools import pairwise

import pytest

from app.drawing.newton import newton_description, newton_svg
from app.local.newton import newton_polygon
from app.local.shorthand import problem_from_shorthand

TYPES = ["(1)_3/2", "(1)_1/2(1)_0", "((1)_1(1)_1)_3/2(11)_0(1)_4", "(1)_1/6", "111", "(1^40)_1/2(1)_0", "(1)_63/2", "1"]


def polygon(shorthand: str) -> tuple[tuple[int, int], ...]:
    return newton_polygon(problem_from_shorthand(shorthand).poles[0])


def markup(shorthand: str) -> str:
    return newton_svg(polygon(shorthand), title="pole <1>", name="newton-1")


@pytest.mark.parametrize("shorthand", TYPES)
def test_corners_are_in_proportion_and_inside(shorthand: str) -> None:
    root, corners = ElementTree.fromstring(markup(shorthand)), polygon(shorthand)
    drawn = [(float(c.attrib["cx"]), -float(c.attrib["cy"])) for c in root.iter("circle")]
    assert len(drawn) == len(corners)
    for (x, y), (rank, irregularity) in zip(drawn, corners, strict=True):
        assert x * corners[-1][0] == pytest.approx(rank * drawn[-1][0], abs=6)
        assert y * corners[-1][1] == pytest.approx(irregularity * drawn[-1][1], abs=6)
    left, top, width, height = map(float, root.attrib["viewBox"].split())
    assert all(left < x < left + width and top < -y < top + height for x, y in drawn)
    path = next(p.attrib["d"] for p in root.iter("path") if p.attrib["class"] == "polygon")
    assert [abs(float(n)) for n in re.findall(r"-?[0-9.]+", path)] == pytest.approx(
        [n for point in drawn for n in point]
    )


@pytest.mark.parametrize("shorthand", TYPES)
def test_slopes_are_written_and_said(shorthand: str) -> None:
    text, corners = markup(shorthand), polygon(shorthand)
    root = ElementTree.fromstring(text)
    slopes = [t.text for t in root.iter("text") if t.attrib["class"] == "slope"]
    assert len(slopes) == len(corners) - 1
    for slope, (a, b) in zip(slopes, pairwise(corners), strict=True):
        numerator, _, denominator = (slope or "").partition("/")
        assert int(numerator) * (b[0] - a[0]) == (b[1] - a[1]) * int(denominator or 1)
        assert f"slope {slope} with multiplicity {b[0] - a[0]}" in newton_description(corners)
    assert "style" not in text and root.attrib["class"] == "diagram"
    assert root.attrib["aria-labelledby"] == "newton-1-title newton-1-description"
    assert len(text) < 20_000
