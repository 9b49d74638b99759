# SPDX-License-Identifier: BSD-3-Clause
"""The friction torque against the closed forms of a coast-down, I ω' = -(c + b ω + k ω²).

With D = 4 k c - b² the time from ω₀ to rest is (2I/√D)[atan((2kω₀ + b)/√D) - atan(b/√D)] for
D > 0, the logarithmic form for D < 0 and a straight line for b = k = 0; derived and computed.
"""

from __future__ import annotations

import pytest
from scipy.integrate import solve_ivp

from rotorpump.physics.constants import Constants
from rotorpump.physics.friction import friction_torque
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

INERTIA = 0.5
SPEED = 12.0


class Rest:
    """The wheel comes to rest."""

    terminal = True
    direction = -1.0

    def __call__(self, time, state):
        return state[1]


@pytest.mark.parametrize(
    ("coulomb", "viscous", "quadratic", "time", "angle"),
    [
        (0.2, 0.0, 0.0, 30.0, 180.0),
        (0.2, 0.03, 0.0, 17.160323619686, 85.597842535427),
        (0.2, 0.0, 0.004, 18.354981362960, 84.739697102199),
        (0.2, 0.03, 0.004, 13.514161980598, 57.881344618575),
        (0.05, 0.06, 0.004, 19.486765581086, 59.653602190389),
        (0.1, 0.04, 0.004, 17.647058823529, 64.736634835117),
    ],
)
@pytest.mark.parametrize("direction", [1.0, -1.0])
def test_time_and_angle_to_rest(coulomb, viscous, quadratic, time, angle, direction):
    friction = AxleFriction(viscous=viscous, coulomb=coulomb, quadratic=quadratic)
    slide = Slide(stroke=(0.1, 0.2))
    constants = Constants.of(Rig(wheel=Wheel(0.3), mass=1.0, radial=slide, friction=friction))

    def rates(_time, state):
        # Counted along the motion, so that rest is approached from above either way.
        torque = friction_torque(constants, direction * state[1], direction)
        return [state[1], direction * torque / INERTIA]

    run = solve_ivp(
        rates, (0.0, 60.0), [0.0, SPEED], "DOP853", events=Rest(), rtol=1e-12, atol=1e-13
    )
    assert run.status == 1
    assert run.t_events[0][0] == pytest.approx(time, rel=1e-10)
    assert run.y_events[0][0][0] == pytest.approx(angle, rel=1e-10)
