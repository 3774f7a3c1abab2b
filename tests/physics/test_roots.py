"""Roots of increasing functions: one and many, smooth ones, steps, and roots at an end of the bracket."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from near import near
from service.physics.roots import increasing_root


@given(st.floats(1e-6, 1e6))
def test_a_square_root_is_found_to_the_last_digits(number):
    root = increasing_root(lambda x: (x * x - number, 2 * x), 0.0, 1.0 + number, 1e-16)
    # The residual's rounding over the slope: half a unit of the last digit, and the same again in the square.
    assert root == near(math.sqrt(number), rel=4e-16)


def test_many_roots_are_those_of_one():
    numbers = np.geomspace(1e-6, 1e6, 23)
    many = increasing_root(lambda x: (x * x - numbers, 2 * x), 0.0 * numbers, 1.0 + numbers, 1e-16)
    assert many == near(np.sqrt(numbers), rel=4e-16)


def step(at):
    def function(x):
        return np.where(np.less(x, at), -1.0, 1.0), np.zeros(np.shape(x))

    return function


def test_a_step_is_bisected():
    assert increasing_root(step(0.3), 0.0, 1.0, 1e-12) == near(0.3, abs=1e-12)
    at = np.array([0.3, 0.9])
    assert increasing_root(step(at), np.zeros(2), np.ones(2), 1e-12) == near(at, abs=1e-12)


@pytest.mark.parametrize("root", [0.0, 1.0])
def test_a_root_at_an_end_of_the_bracket_is_found(root):
    assert increasing_root(lambda x: (x - root, 1.0), 0.0, 1.0, 0.0) == root
    assert increasing_root(lambda x: (x - root, np.ones(1)), np.zeros(1), np.ones(1), 0.0).tolist() == [root]


def test_a_converged_root_is_not_moved_by_those_still_under_way():
    slow = np.array([0.0, 1e-300])

    def function(x):
        return np.array([x[0] - 0.5, x[1] ** 3 - 1e-12]), np.array([1.0, 3 * x[1] ** 2])

    assert increasing_root(function, slow, np.ones(2), 1e-15) == near([0.5, 1e-4], rel=1e-12)


def test_the_steps_begin_where_they_are_told_to():
    seen = []

    def square(x):
        seen.append(x)
        return x * x - 2.0, 2.0 * x

    assert increasing_root(square, 0.0, 2.0, 1e-15, 1.5) == near(math.sqrt(2.0), rel=1e-15)
    assert seen[0] == 1.5
    many = increasing_root(square, np.zeros(2), np.full(2, 2.0), np.full(2, 1e-15), np.array([1.5, 1.25]))
    assert many == near(math.sqrt(2.0), rel=1e-15)
