# SPDX-License-Identifier: BSD-3-Clause
"""Collocation nodes: identities of the points, weights and slopes."""

from __future__ import annotations

import math

import numpy as np
import pytest

from rotorpump.transcription.nodes import radau_nodes

DEGREES = range(1, 9)
EXACT = 1e-13


@pytest.mark.parametrize("degree", DEGREES)
def test_points_rise_from_zero_to_one(degree):
    nodes = radau_nodes(degree)
    assert nodes.degree == degree
    assert nodes.points.shape == (degree + 1,)
    assert (nodes.points[0], nodes.points[-1]) == (0.0, 1.0)
    assert np.all(np.diff(nodes.points) > 0.0)


def test_three_points_are_the_known_ones():
    # Radau IIA of three stages: (4 ∓ √6)/10 and 1, with weights (16 ∓ √6)/36 and 1/9
    # (Hairer & Wanner, Solving Ordinary Differential Equations II, section IV.5; from memory).
    nodes, root = radau_nodes(3), math.sqrt(6.0)
    points = [0.0, (4.0 - root) / 10.0, (4.0 + root) / 10.0, 1.0]
    assert nodes.points == pytest.approx(points, abs=EXACT)
    weights = [(16.0 - root) / 36.0, (16.0 + root) / 36.0, 1.0 / 9.0]
    assert nodes.weights == pytest.approx(weights, abs=EXACT)


def test_two_points_are_the_known_ones():
    # Radau IIA of two stages: 1/3 and 1, weights 3/4 and 1/4 (same source, from memory).
    nodes = radau_nodes(2)
    assert nodes.points == pytest.approx([0.0, 1.0 / 3.0, 1.0], abs=EXACT)
    assert nodes.weights == pytest.approx([0.75, 0.25], abs=EXACT)


@pytest.mark.parametrize("degree", DEGREES)
def test_weights_are_positive_and_sum_to_one(degree):
    weights = radau_nodes(degree).weights
    assert weights.shape == (degree,)
    assert np.all(weights > 0.0)
    assert weights.sum() == pytest.approx(1.0, abs=EXACT)


@pytest.mark.parametrize("degree", DEGREES)
def test_quadrature_is_exact_up_to_twice_the_degree_less_two(degree):
    nodes = radau_nodes(degree)

    def miss(power):
        return abs(float(nodes.weights @ nodes.points[1:] ** power) - 1.0 / (power + 1))

    assert max(miss(power) for power in range(2 * degree - 1)) < EXACT
    # and no further: the order of the method is not higher than stated
    assert miss(2 * degree - 1) > 1e-10


@pytest.mark.parametrize("degree", DEGREES)
def test_slopes_are_exact_on_polynomials_of_the_degree(degree):
    nodes = radau_nodes(degree)
    assert nodes.slopes.shape == (degree, degree + 1)
    for power in range(degree + 1):
        expected = power * nodes.points[1:] ** max(power - 1, 0)
        scale = np.abs(nodes.slopes).sum(axis=1).max()
        assert nodes.slopes @ nodes.points**power == pytest.approx(expected, abs=EXACT * scale)


@pytest.mark.parametrize("degree", DEGREES)
def test_slopes_integrate_back(degree):
    # The last row of the inverse of the inner block holds the weights: the stage equations
    # integrate a rate from 0 to 1 by the quadrature.
    nodes = radau_nodes(degree)
    block = nodes.slopes[:, 1:]
    # An inverse loses as many digits as the condition number has.
    rounding = 1e-15 * np.linalg.cond(block) + EXACT
    assert np.linalg.inv(block)[-1] == pytest.approx(nodes.weights, abs=rounding)
