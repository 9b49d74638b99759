# SPDX-License-Identifier: BSD-3-Clause
"""The command line: parse, call, print.

Results go to stdout; progress, warnings and messages to stderr. Exit codes: 0 done and verified,
2 the input is wrong, 3 no solution, 4 solved but a check failed, 130 interrupted.
"""

from __future__ import annotations

import argparse
import sys
from collections.abc import Sequence

from rotorpump.commands import run_compare, run_optimize
from rotorpump.console import complain
from rotorpump.errors import InputError, RotorpumpError, SolveError
from rotorpump.exit_codes import INTERRUPTED, NO_SOLUTION, WRONG_INPUT, exit_code
from rotorpump.version import installed_version

DESCRIPTION = """\
A wheel is spun up with no motor on its axle by a mass that moves along slides fixed to it.
rotorpump sets the instantaneous (ideal) law beside the best motion under the limits of the drives,
and checks that motion independently."""

RIG_FILES = """\
rig files (TOML, SI units):
  [wheel]     inertia [kg m2], mass [kg], unbalance [kg m], unbalance_angle [rad]
  [mass]      mass [kg], the moving mass
  [radial]    stroke = [lo, hi] [m from the axle], and any of speed [m/s], force [N],
              power [W], force_rate [N/s], continuous_force [N rms], stall_force [N] with
              no_load_speed [m/s], motor_constant [N/sqrt(W)], rubbing [N],
              end_stops = "bear" | "avoid"; or position [m], which holds the mass there
  [tangential]  the same, across the radius; held at 0 without this table
  [friction]  viscous [N m s], coulomb [N m], quadratic [N m s2], load [1] with
              journal_radius [m]
  [task]      kind = "pump": duration [s], start_angle [rad], start_speed [rad/s],
                start_radial [m], start_tangential [m]
              kind = "spin-up": energy [J] or speed [rad/s] or full_turn = true, deadline [s],
                and a start as for "pump"
              kind = "rotate": mean_speed [rad/s], load_torque [N m], direction = 1 | -1
  [rig]       gravity [m/s2] in the plane of the wheel

exit codes:
  0 done and verified   2 wrong input   3 no solution   4 a check failed   130 interrupted"""


def main(argv: Sequence[str] | None = None) -> int:
    """Run the command line.

    Parameters
    ----------
    argv : sequence of str, optional
        The arguments; those of the process by default.

    Returns
    -------
    int
        The exit code.
    """
    try:
        arguments = build_parser().parse_args(argv)
    except SystemExit as stop:
        return stop.code if isinstance(stop.code, int) else WRONG_INPUT
    try:
        code: int = arguments.run(arguments)
    except InputError as error:
        complain(f"rotorpump: {error}")
        return WRONG_INPUT
    except SolveError as error:
        complain(f"rotorpump: no solution: {error}")
        return exit_code((error.solution,))
    except RotorpumpError as error:
        complain(f"rotorpump: no solution: {error}")
        return NO_SOLUTION
    except KeyboardInterrupt:
        complain("rotorpump: interrupted")
        return INTERRUPTED
    return code


def build_parser() -> argparse.ArgumentParser:
    """Return the parser of the command line."""
    parser = argparse.ArgumentParser(
        prog="rotorpump",
        description=DESCRIPTION,
        epilog=RIG_FILES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"%(prog)s {installed_version()}")
    commands = parser.add_subparsers(title="commands", required=True, metavar="COMMAND")
    compare = _command(
        commands,
        "compare",
        "ideal, practical and optimal motion side by side",
        "Set the ideal law, the practical law and the best motion under the limits of the drives"
        " side by side.",
        "folder for compare.json, trajectory.csv of the best motion, and pictures",
    )
    compare.add_argument(
        "--attribute",
        action="store_true",
        help="also find the best motion under the speed limits alone, to tell apart what they and"
        " the other limits cost (one more solve)",
    )
    compare.set_defaults(run=run_compare)
    optimize = _command(
        commands,
        "optimize",
        "the best motion under the limits of the drives",
        "Find the best motion under the limits of the drives, and check it.",
        "folder for solution.json, trajectory.csv, and pictures",
    )
    optimize.add_argument(
        "--sample",
        metavar="HZ",
        type=float,
        help="write uniform samples of the motion at this rate [Hz] instead of its nodes",
    )
    optimize.set_defaults(run=run_optimize)
    return parser


def _command(
    commands: argparse._SubParsersAction[argparse.ArgumentParser],
    name: str,
    brief: str,
    description: str,
    out: str,
) -> argparse.ArgumentParser:
    """Add a command with the arguments that all of them share."""
    command = commands.add_parser(
        name,
        help=brief,
        description=description,
        epilog=RIG_FILES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    command.add_argument(
        "rig",
        nargs="?",
        metavar="RIG.toml",
        help="the rig and its task; the built-in example by default",
    )
    command.add_argument(
        "--objective",
        metavar="NAME",
        help="what to make the most or least of. pump: energy, momentum, speed (at the end);"
        " spin-up: time, work, heat, work+heat; rotate: speed, work, heat, work+heat, 'load power'."
        " The first by default; work for a rotation with a mean_speed",
    )
    command.add_argument(
        "--accuracy",
        metavar="X",
        type=float,
        default=1e-4,
        help="relative accuracy of the best motion (default: 1e-4)",
    )
    command.add_argument("--out", metavar="DIR", help=out)
    command.add_argument(
        "--json",
        metavar="FILE",
        help="write the result as JSON, all in SI units; - for stdout, which then has nothing else",
    )
    return command


if __name__ == "__main__":
    sys.exit(main())
