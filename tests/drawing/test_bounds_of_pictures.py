"""Pictures stay small, are made fast and need nothing heavy."""

import subprocess
import sys
import time
import xml.etree.ElementTree as ElementTree

import pytest

from app.drawing.layout import place
from app.drawing.svg import small_svg, svg
from app.roots.quiver import Quiver
from tests.drawing.hand_built import NAMED, built, leg

LARGE = [
    *NAMED.values(),
    built([[leg(399)]] * 16),
    built([[leg(8)] * 8, [leg(8)] * 8, *([[leg(8, 80)]] * 8)], slopes={0: 9, 1: 9}),
    built([[leg(3)] * 2] * 64),
]


@pytest.mark.parametrize("quiver", LARGE)
def test_markup_is_bounded(quiver: Quiver) -> None:
    markup = svg(place(quiver), title="t", description="d", wrap=lambda name, inner: f'<a href="#{name}">{inner}</a>')
    assert len(markup.encode()) < 150_000
    ElementTree.fromstring(markup)
    small = small_svg(place(quiver, small=True), title="t", description="d", name="step")
    assert len(small.encode()) < 60_000


@pytest.mark.parametrize(("name", "bound"), [("D4", 0.02), ("E8", 0.02), ("twelve legs", 0.08)])
def test_drawing_is_fast(name: str, bound: float) -> None:
    """Far above the usual time, so that a busy machine passes; what is quadratic in the legs does not."""
    best = min(_seconds(NAMED[name]) for _ in range(5))
    assert best < bound


def _seconds(quiver: Quiver) -> float:
    start = time.process_time()
    svg(place(quiver), title="t", description="d")
    return time.process_time() - start


def test_a_small_picture_has_short_legs_and_no_labels() -> None:
    small, large = place(NAMED["E8"], small=True), place(NAMED["E8"])
    assert small.box[2] < large.box[2] and small.box[3] < large.box[3]
    assert len(small.nodes) == 3 + 6 - 2 and sum(fold.hidden for fold in small.folds) == 2
    root = ElementTree.fromstring(small_svg(small, title="t", description="d", name="s"))
    assert root.attrib["class"] == "diagram small"
    assert all("parameter" not in node.name for node in small.nodes)


def test_nothing_heavy_is_imported() -> None:
    code = (
        "import sys, app.drawing.svg, app.drawing.layout, app.drawing.orbit_svg, app.drawing.newton\n"
        "print([name for name in ('numpy', 'sympy', 'networkx', 'scipy', 'flint', 'fastapi') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
