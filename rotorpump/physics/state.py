# SPDX-License-Identifier: BSD-3-Clause
"""State and motion of the rig in the wheel's frame."""

from __future__ import annotations

from typing import Any, NamedTuple


class Slides(NamedTuple):
    """Place and speed of the mass along the wheel's axes (numbers, arrays or symbols).

    Parameters
    ----------
    radial, radial_speed : float
        Distance from the axle along the radial axis, ρ [m], and its rate vρ [m/s].
    tangential, tangential_speed : float
        Offset along the tangential axis, τ [m], and its rate vτ [m/s].
    """

    radial: Any
    radial_speed: Any = 0.0
    tangential: Any = 0.0
    tangential_speed: Any = 0.0


class Push(NamedTuple):
    """What determines the motion along one axis: a force, or an acceleration that is enforced.

    Parameters
    ----------
    force : float
        Whole force on the mass along the axis, drive, stop and rubbing together [N]; not read
        where the axis is held.
    held : bool
        Whether the rail, a stop or an ideal drive enforces the acceleration, whatever force that
        takes.
    acceleration : float
        The enforced acceleration relative to the wheel [m/s2].
    """

    force: Any = 0.0
    held: bool = False
    acceleration: Any = 0.0


HOLD = Push(held=True)
"""The mass stays where it is along this axis."""


class Motion(NamedTuple):
    """Accelerations and forces at one instant (numbers, arrays or symbols).

    Parameters
    ----------
    wheel : float
        Acceleration of the wheel, φ̈ [rad/s2].
    radial, tangential : float
        Accelerations of the mass relative to the wheel, ρ̈ and τ̈ [m/s2].
    radial_contact, tangential_contact : float
        Whole forces on the mass along the axes, C_ρ and C_τ [N].
    axle_load : float
        Magnitude of the axle's reaction, |R| [N].
    """

    wheel: Any
    radial: Any
    tangential: Any
    radial_contact: Any
    tangential_contact: Any
    axle_load: Any
