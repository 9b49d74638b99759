# SPDX-License-Identifier: BSD-3-Clause
"""Solutions that several tests look at."""

from __future__ import annotations

from functools import cache

import bench_rigs
import pytest

import rotorpump as rp


@pytest.fixture(scope="session")
def solve():
    """Optimize with default settings, once for each rig, task and objective."""

    @cache
    def once(rig, task, objective=None):
        return rp.optimize(rig, task, objective=objective)

    return once


@pytest.fixture(scope="session")
def pumped(solve):
    """Best motion of the bench rig pumped for a few seconds."""
    return solve(bench_rigs.BENCH, bench_rigs.PUMP)


@pytest.fixture(scope="session")
def rotated(solve):
    """Best steady rotation of the bench rig."""
    return solve(bench_rigs.BENCH, bench_rigs.ROTATE)
