"""Speed of the operations that everything is made of; the bounds are several times what a slow machine needs."""

import time
from fractions import Fraction
from random import Random

from app.exact.value import Value, total

SMALL = [Value.rational(k) for k in range(-5, 6)]
SMALL += [Value.symbol(name) * k + j for name in "abc" for k in (1, -2) for j in (0, 1)]
SMALL += [Value.symbol("a") - Value.symbol("b")]


def seconds(action):
    began = time.process_time()
    action()
    return time.process_time() - began


def test_additions_of_small_values():
    random = Random(1)
    pairs = [(random.choice(SMALL), random.choice(SMALL)) for _ in range(100_000)]

    def add_all():
        for first, second in pairs:
            first + second

    assert seconds(add_all) < 0.5  # measured: 0.06


def test_adding_little_to_much_costs_little():
    large = total(Value.symbol(f"x{k}") for k in range(300))
    one = Value.symbol("y")

    def add_often():
        for _ in range(10_000):
            large + one

    assert seconds(add_often) < 0.5  # measured: 0.02


def test_a_long_sum_is_linear():
    values = [Value.symbol(f"x{k % 1000}") * Fraction(1, 1 + k % 3) for k in range(20_000)]
    assert seconds(lambda: total(values)) < 0.5  # measured: 0.03
