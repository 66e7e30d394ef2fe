"""Floating approximation of exact values: plain floats, without any bound on the error.

For pictures and for starting points of numerical methods; no decision may rest on it.
"""

from collections.abc import Mapping
from math import sqrt

from app.exact.value import Value


def approximate(value: Value, point: Mapping[str, complex]) -> complex:
    """A floating approximation of the value where the symbols have the values of ``point``.

    Every term is rounded and the sum is rounded again, so where large terms cancel few digits or none are right.
    Raises KeyError for a symbol that is missing in ``point`` and OverflowError where a coefficient exceeds floats.
    """
    result = 0j
    for (monomial, radical), coefficient in value.terms.items():
        term = complex(float(coefficient) * sqrt(abs(radical)))
        if radical < 0:
            term *= 1j
        for name, power in monomial:
            term *= point[name] ** power
        result += term
    return result
