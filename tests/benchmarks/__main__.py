"""All figures one after another."""

from tests.benchmarks import findings_figures, page_figures
from tests.benchmarks.timing import show

show([*findings_figures.figures(), *page_figures.figures()])
findings_figures.growth()
