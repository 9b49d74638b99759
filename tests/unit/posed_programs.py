# SPDX-License-Identifier: BSD-3-Clause
"""Small programs of every kind, for tests of the transcription and of the solver's caller."""

from __future__ import annotations

import math

import numpy as np

from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.transcription.arcs import Arc
from rotorpump.transcription.interval import ANGLE, TIME, Form
from rotorpump.transcription.mesh import FREE, Mesh
from rotorpump.transcription.path import FORCE_LIMITED
from rotorpump.transcription.problem import Goal, Problem, Start, Term
from rotorpump.transcription.program import Program

LIMITS = ({}, {"speed": 0.8}, {"speed": 0.8, "force": 40.0})
"""Limits of the slide on each rung of the ladder."""

RELAXATION = 1e-2


def rig_on(rung: int = FORCE_LIMITED, **changes) -> Rig:
    parts = {
        "wheel": Wheel(inertia=0.25, mass=3.0),
        "mass": 1.2,
        "radial": Slide(stroke=(0.2, 0.4), **LIMITS[rung]),
        "friction": AxleFriction(viscous=0.05, coulomb=0.04, quadratic=0.003),
    }
    return Rig(**(parts | changes))


def swing_program(
    rung: int = FORCE_LIMITED,
    *,
    relaxed: bool = False,
    rests: dict[int, int] | None = None,
    flexible: bool = True,
    per_arc: int = 2,
    degree: int = 3,
    horizon: float | None = None,
    goal: Goal | None = None,
) -> Program:
    """A swing from 0.5 rad to the other side and back, in the time form: three arcs."""
    rig = rig_on(rung)
    chain = (Arc(-1, "angle", 0.0), Arc(-1, "standstill"), Arc(1, "free"))
    mesh = Mesh.uniform(len(chain), per_arc, flexible=flexible)
    pattern = np.full(mesh.intervals, FREE)
    for place, rest in (rests or {}).items():
        pattern[place] = rest
    problem = Problem(
        rig,
        Form(TIME, rung, degree, relaxed=relaxed),
        chain,
        (Term("energy", -1.0), Term("time", 0.3), Term("angle", 0.2), Term("speed", 0.1)),
        Start(0.5, 0.0, 0.4),
        horizon=horizon,
        goal=goal,
    )
    mesh = mesh.with_rests(pattern, flexible=flexible)
    return Program(problem, mesh, RELAXATION if relaxed else 0.0)


def turn_program(
    rung: int = FORCE_LIMITED,
    *,
    relaxed: bool = False,
    intervals: int = 3,
    closed_momentum: bool = True,
    degree: int = 3,
) -> Program:
    """One turn of a periodic rotation, in the angle form."""
    problem = Problem(
        rig_on(rung),
        Form(ANGLE, rung, degree, relaxed=relaxed),
        (Arc(1, "angle", 2.0 * math.pi),),
        (Term("time", 1.0), Term("momentum", -0.2), Term("speed", 0.1)),
        None,
        closed_momentum=closed_momentum,
    )
    mesh = Mesh.uniform(1, intervals, flexible=False)
    return Program(problem, mesh, RELAXATION if relaxed else 0.0)


def random_variables(program: Program, rng: np.random.Generator) -> np.ndarray:
    """Scaled variables that violate everything but the order in time and angle."""
    z = rng.uniform(-1.0, 1.0, program.layout.variables)
    node = program.layout.node
    for which in (0, 1) if program.problem.form.independent == ANGLE else (0,):
        z[node[:, which]] = np.cumsum(rng.uniform(0.2, 1.0, node.shape[0]))
    return z
