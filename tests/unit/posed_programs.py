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
from rotorpump.transcription.form import ANGLE, TIME, AxisForm, Form
from rotorpump.transcription.mesh import FREE, HIGH, LOW, Mesh
from rotorpump.transcription.path import FORCE_LIMITED, RATE_LIMITED
from rotorpump.transcription.problem import Goal, Problem, Start, Term
from rotorpump.transcription.program import Program

LIMITS = ({}, {"speed": 0.8}, {"speed": 0.8, "force": 40.0})
"""Limits of the slide on each rung of the ladder."""

RELAXATION = 1e-2


def radial_form(independent: str, rung: int, degree: int = 3, *, relaxed: bool = False) -> Form:
    """Structure of a radial slide through the axle."""
    axis = AxisForm("radial", rung, bears=rung == FORCE_LIMITED)
    return Form(independent, (axis,), degree, relaxed=relaxed)


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
    mesh = Mesh.uniform(len(chain), per_arc, 1, flexible=flexible)
    pattern = np.full((1, mesh.intervals), FREE)
    for place, rest in (rests or {}).items():
        pattern[0, place] = rest
    problem = Problem(
        rig,
        radial_form(TIME, rung, degree, relaxed=relaxed),
        chain,
        (Term("energy", -1.0), Term("time", 0.3), Term("angle", 0.2), Term("speed", 0.1)),
        Start(0.5, 0.0, 0.4),
        horizon=horizon,
        goal=goal,
    )
    mesh = mesh.with_pattern(pattern, pattern, flexible=flexible)
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
        radial_form(ANGLE, rung, degree, relaxed=relaxed),
        (Arc(1, "angle", 2.0 * math.pi),),
        (Term("time", 1.0), Term("momentum", -0.2), Term("speed", 0.1)),
        None,
        closed_momentum=closed_momentum,
    )
    mesh = Mesh.uniform(1, intervals, 1, flexible=False)
    return Program(problem, mesh, RELAXATION if relaxed else 0.0)


def full_rig(rung: int = FORCE_LIMITED) -> Rig:
    """Both slides, every limit of the drives, every term of friction, an unbalance."""
    limits = {"speed": 0.8, "force": 40.0, "power": 20.0, "rubbing": 0.5, "motor_constant": 8.0}
    limits |= {"stall_force": 60.0, "no_load_speed": 1.5, "continuous_force": 25.0}
    if rung == RATE_LIMITED:
        limits["force_rate"] = 900.0
    return rig_on(
        wheel=Wheel(inertia=0.25, mass=3.0, unbalance=0.07, unbalance_angle=0.8),
        radial=Slide(stroke=(0.2, 0.4), **limits),
        tangential=Slide(stroke=(-0.1, 0.15), **limits),
        friction=AxleFriction(0.05, 0.04, 0.003, load=0.02, journal_radius=0.02),
    )


def full_program(
    rung: int = FORCE_LIMITED, *, independent: str = TIME, relaxed: bool = False
) -> Program:
    """A program with all kinds of rows at once, some intervals resting."""
    rig = full_rig(rung)
    form = Form.of(rig, independent, "work+heat", relaxed=relaxed)
    rests = np.zeros((2, 4), dtype=np.intp)
    rests[0, 1], rests[1, 2] = (0, 0) if relaxed else (HIGH, LOW)
    signs = np.array([[1, -1, 1, -1], [-1, -1, 1, 1]])
    if independent == TIME:
        chain = (Arc(-1, "standstill"), Arc(1, "free"))
        start: Start | None = Start(0.5, 0.0, 0.4, 0.025)
        terms = (Term("energy", -1.0), Term("speed", 0.3))
    else:
        chain = (Arc(1, "angle", math.pi), Arc(1, "angle", 2.0 * math.pi))
        start, terms = None, (Term("time", 1.0),)
    terms += () if relaxed else (Term("work", 1.0), Term("heat", 0.5))
    problem = Problem(rig, form, chain, terms, start, load_torque=0.02)
    mesh = Mesh.uniform(2, 2, 2, flexible=not relaxed)
    mesh = mesh.with_pattern(rests, signs, flexible=not relaxed)
    return Program(problem, mesh, RELAXATION if relaxed else 0.0)


def random_variables(program: Program, rng: np.random.Generator) -> np.ndarray:
    """Scaled variables that violate everything but the order in time and angle."""
    z = rng.uniform(-1.0, 1.0, program.layout.variables)
    angle_too = program.problem.form.independent == ANGLE
    for name in ("time", "angle") if angle_too else ("time",):
        places = program.layout.nodes(name)
        z[places] = np.cumsum(rng.uniform(0.2, 1.0, places.size))
    return z
