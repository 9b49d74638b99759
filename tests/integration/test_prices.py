# SPDX-License-Identifier: BSD-3-Clause
"""The price of a limit is the slope of the best value: found anew with a looser and a tighter one.

By the envelope theorem the multipliers of a limit are the derivative of the optimal value with
respect to it, the motion being free to adapt. The case is a rotation with every limit active for
so long that its slope is far above the noise of the solves (relative 1e-4, against a per cent or
more here).
"""

from __future__ import annotations

import pytest
from bench_rigs import BENCH, DRIVE_LIMITS, MOTORED, ROTATE, with_slide

import rotorpump as rp

RATED = with_slide(MOTORED, **DRIVE_LIMITS["continuous force"])

STEP = 0.03
"""Relative change of a limit; a central difference, so its own error is of the order STEP²."""


@pytest.mark.parametrize(
    ("rig", "name", "unit"),
    [(BENCH, "speed", "m/s"), (BENCH, "force", "N"), (RATED, "continuous_force", "N")],
)
def test_a_price_is_the_slope_of_the_best_value(rig, name, unit, solve):
    known = solve(rig, ROTATE)
    use = next(entry for entry in known.limits if entry.name == f"radial {name.replace('_', ' ')}")
    limit = getattr(rig.radial, name)
    assert (use.value, use.unit) == (limit, unit)
    assert use.active_share > 0.25
    values = []
    for factor in (1.0 - STEP, 1.0 + STEP):
        best = rp.optimize(with_slide(rig, **{name: factor * limit}), ROTATE, guess=known)
        assert best.verified
        values.append(best.objective.value)
    slope = (values[1] - values[0]) / (2.0 * STEP * limit)
    # the change itself stands out of the noise
    assert values[1] - values[0] > 5e-3 * values[0]
    assert use.price == pytest.approx(slope, rel=0.1)


def test_prices_tell_which_limit_matters(pumped):
    speed, force = (
        next(entry for entry in pumped.limits if entry.name == name)
        for name in ("radial speed", "radial force")
    )
    # the drive is strong enough for this pump: it reaches its force for some instants only
    assert force.active_share < 0.15 < speed.active_share
    assert 0.0 <= force.price * force.value < 0.02 * speed.price * speed.value
