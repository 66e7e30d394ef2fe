"""Random values and random texts of the number grammar, shared by the tests of exact numbers."""

from fractions import Fraction

from hypothesis import strategies as st

from app.exact.value import Value

SYMBOLS = ("a", "b", "t_1", "λ")
RADICALS = (1, -1, 2, -2, 3, 5, 6, -6, 10, 30)

small_integers = st.integers(-6, 6)
rationals = st.one_of(small_integers, st.fractions(-5, 5, max_denominator=12))
monomials = st.dictionaries(st.sampled_from(SYMBOLS), st.integers(1, 3), max_size=3).map(
    lambda powers: tuple(sorted(powers.items()))
)


def values_over(radicals=RADICALS, monomial_strategy=monomials, max_size=5):
    """Values with few terms over the given radicals."""
    terms = st.tuples(st.tuples(monomial_strategy, st.sampled_from(radicals)), rationals)
    return st.lists(terms, max_size=max_size).map(Value.from_terms)


values = values_over()
constants = values_over(monomial_strategy=st.just(()))
real_constants = values_over(radicals=(1, 2, 3, 5, 6, 10, 30), monomial_strategy=st.just(()))


def _spaced(pieces):
    return " ".join(pieces)


def texts(depth=3):
    """Texts of the grammar in which every division is by a non-zero rational; powers are small."""
    number = st.one_of(
        st.integers(0, 12).map(str),
        st.sampled_from(["0.5", "2.25", "10/4", "i", "sqrt(2)", "sqrt(8)", "sqrt(3/4)", "sqrt(-6)", "sqrt(0)"]),
        st.sampled_from(SYMBOLS),
    )
    if depth == 0:
        return number
    inner = texts(depth - 1)
    return st.one_of(
        number,
        st.tuples(inner, st.sampled_from(["+", "-"]), inner).map(_spaced),
        st.tuples(inner, inner).map(lambda pair: f"({pair[0]})*({pair[1]})"),
        st.tuples(inner, st.integers(0, 3)).map(lambda pair: f"({pair[0]})^{pair[1]}"),
        inner.map(lambda text: f"-({text})"),
        st.tuples(inner, st.fractions(1, 7, max_denominator=5)).map(lambda pair: f"({pair[0]})/({pair[1]})"),
    )


def evaluate_at(value, point):
    """The value at a point by Fractions of Gaussian numbers; only for values without roots other than i."""
    real, imaginary = Fraction(0), Fraction(0)
    for (monomial, radical), coefficient in value.terms.items():
        term = Fraction(coefficient)
        for name, power in monomial:
            term *= point[name] ** power
        if radical == 1:
            real += term
        elif radical == -1:
            imaginary += term
        else:
            raise ValueError("a root occurs")
    return real, imaginary
