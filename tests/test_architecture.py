# SPDX-License-Identifier: BSD-3-Clause
"""The direction of the data, as a test: who may import whom, and how long a file may be.

Each rule is a function from sources to violations, so that it can be shown to find one.
"""

from __future__ import annotations

import ast
from pathlib import Path
from typing import NamedTuple

import pytest

ROOT = Path(__file__).resolve().parents[1]
FACADE = "rotorpump"

LAYERS = (
    ("errors", "quantities", "version", "rig", "tasks"),
    ("measures",),
    ("physics",),
    ("solution",),
    ("laws",),
    ("transcription",),
    ("solving",),
    ("checking",),
    ("studies",),
    ("plotting",),
    ("exit_codes", "console", "commands", "cli", "__main__"),
)
"""Folders and files of the package; each layer may import itself and those before it."""

LAZY = {
    # Text, files and pictures of a result are needed only when they are asked for; Matplotlib
    # takes long to load.
    ("rotorpump.solution.solution", "rotorpump.solution.summary"),
    ("rotorpump.solution.solution", "rotorpump.solution.storage"),
    ("rotorpump.solution.solution", "rotorpump.plotting.profiles"),
    ("rotorpump.studies.comparison", "rotorpump.studies.comparison_table"),
    ("rotorpump.studies.comparison", "rotorpump.plotting.compare"),
    ("rotorpump.commands", "rotorpump.plotting.pictures"),
    # So do SciPy's subpackages, longer than all of rotorpump.
    ("rotorpump.physics.phases", "scipy.integrate"),
    ("rotorpump.laws.holding", "scipy.integrate"),
    ("rotorpump.laws.turns", "scipy.optimize"),
    ("rotorpump.transcription.nodes", "scipy.special"),
    ("rotorpump.solving.reach", "scipy.integrate"),
}
"""Imports allowed inside functions: (importer, imported)."""

SOLVER_CALLS = {"nlpsol", "qpsol", "conic", "Opti"}
SOLVER_FILE = "rotorpump.solving.ipopt"
APART_FROM_CHECKING = ("rotorpump.transcription", "rotorpump.solving", "rotorpump.laws", "casadi")

LONGEST = 299
LICENCE = "# SPDX-License-Identifier: BSD-3-Clause"


class Import(NamedTuple):
    """One imported module: by whom, in which line, and whether only when a function runs."""

    importer: str
    target: str
    line: int
    lazy: bool


def read_sources(*folders):
    """Text of every Python file by its dotted name; a folder's `__init__` has the folder's."""
    files = (file for folder in folders for file in (ROOT / folder).rglob("*.py"))
    return {dotted(file.relative_to(ROOT)): file.read_text(encoding="utf-8") for file in files}


def dotted(path):
    return ".".join(path.with_suffix("").parts).removesuffix(".__init__")


def find_imports(sources):
    return [found for name, text in sources.items() for found in _imports_of(name, text, sources)]


def _imports_of(importer, text, sources):
    tree = ast.parse(text)
    inside = {
        id(node)
        for function in ast.walk(tree)
        if isinstance(function, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda)
        for node in ast.walk(function)
    }
    for node in ast.walk(tree):
        for target in _targets(node, sources):
            yield Import(importer, target, node.lineno, id(node) in inside)


def _targets(node, sources):
    if isinstance(node, ast.Import):
        return {alias.name for alias in node.names}
    if not isinstance(node, ast.ImportFrom):
        return set()
    base = "." * node.level + (node.module or "")
    # What is taken from a folder may be one of its files.
    full = {f"{base}.{alias.name}" for alias in node.names}
    return {name if name in sources else base for name in full}


def layer_of(module):
    """Place of a module in the order of the layers; None for the facade and what is foreign."""
    parts = module.split(".")
    if parts[0] != FACADE or len(parts) == 1:
        return None
    places = [place for place, layer in enumerate(LAYERS) if parts[1] in layer]
    return places[0] if places else len(LAYERS)


def misdirected(sources):
    """Imports against the direction of the data, and modules that stand in no layer."""
    homeless = [name for name in sources if layer_of(name) == len(LAYERS)]
    backward = [
        found
        for found in find_imports(sources)
        if found.importer != FACADE
        and (found.importer, found.target) not in LAZY
        and layer_of(found.target) is not None
        and layer_of(found.target) > layer_of(found.importer)
    ]
    return homeless + backward


def lazy_imports(sources):
    """Imports inside functions that are not on the list."""
    return [f for f in find_imports(sources) if f.lazy and (f.importer, f.target) not in LAZY]


def facade_imports(sources):
    """Imports of the facade from inside, and relative ones, which hide what they import."""
    return [
        (name, node.lineno)
        for name, text in sources.items()
        if name != FACADE
        for node in ast.walk(ast.parse(text))
        if (isinstance(node, ast.ImportFrom) and (node.level > 0 or node.module == FACADE))
        or (isinstance(node, ast.Import) and FACADE in {alias.name for alias in node.names})
    ]


def reached(imports, start):
    """Every module that importing ``start`` loads through imports at module level."""
    found, waiting = set(), [start]
    while waiting:
        here = waiting.pop()
        fresh = {f.target for f in imports if f.importer == here and not f.lazy} - found
        found |= fresh
        waiting += fresh
    return found


def cyclic(sources):
    """Modules that import themselves by way of others."""
    imports = find_imports(sources)
    return [name for name in sources if name in reached(imports, name)]


def mixed_checks(sources):
    """What the checks load, directly or not, of the code whose results they check."""
    imports = find_imports(sources)
    return [
        (name, target)
        for name in sources
        if name.startswith("rotorpump.checking")
        for target in reached(imports, name)
        if target.startswith(APART_FROM_CHECKING)
    ]


def stray_solver_calls(sources):
    """Modules outside the one solver file that name one of CasADi's solvers."""
    return [
        (name, word)
        for name, text in sources.items()
        if name != SOLVER_FILE
        for node in ast.walk(ast.parse(text))
        for word in (getattr(node, "attr", None), getattr(node, "id", None), _alias(node))
        if word in SOLVER_CALLS
    ]


def _alias(node):
    return node.name if isinstance(node, ast.alias) else None


def unfit_files(sources):
    """Files that are too long or do not begin with the licence."""
    lines = {name: text.splitlines() for name, text in sources.items()}
    return [
        (name, len(rows))
        for name, rows in lines.items()
        if len(rows) > LONGEST or not rows or rows[0] != LICENCE
    ]


SOURCES = read_sources("rotorpump")


def test_every_module_is_read():
    assert {"rotorpump", "rotorpump.cli", "rotorpump.rig.rig", SOLVER_FILE} <= set(SOURCES)
    assert len(find_imports(SOURCES)) > 100


@pytest.mark.parametrize(
    "rule",
    [
        misdirected,
        lazy_imports,
        facade_imports,
        cyclic,
        mixed_checks,
        stray_solver_calls,
        unfit_files,
    ],
)
def test_the_package_keeps_the_rule(rule):
    assert rule(SOURCES) == []


def test_every_exception_is_made_use_of():
    assert {(f.importer, f.target) for f in find_imports(SOURCES) if f.lazy} == LAZY


def test_tests_and_benchmarks_are_short_and_licensed():
    assert unfit_files(read_sources("tests", "benchmarks")) == []


LATE = "def f():\n    "
GOOD = {
    "rotorpump.rig.wheel": "from rotorpump.quantities import positive",
    "rotorpump.quantities": "import math",
    "rotorpump.checking.report": "from rotorpump.rig.wheel import Wheel",
    SOLVER_FILE: "import casadi\ncasadi.nlpsol()",
}


@pytest.mark.parametrize(
    ("rule", "module", "text"),
    [
        (misdirected, "rotorpump.quantities", "import rotorpump.rig.wheel\nimport rotorpump.laws"),
        (misdirected, "rotorpump.physics.energy", "from rotorpump.laws import lead"),
        (misdirected, "rotorpump.solving.seeds", f"{LATE}from rotorpump.studies.x import y"),
        (misdirected, "rotorpump.tasks", "from rotorpump.measures import measure"),
        (misdirected, "rotorpump.extras", "import math"),
        (lazy_imports, "rotorpump.quantities", f"{LATE}import csv"),
        (lazy_imports, "rotorpump.tasks", "f = lambda: 0\nclass A:\n  def f(s):\n    import csv"),
        (facade_imports, "rotorpump.cli", "import rotorpump"),
        (facade_imports, "rotorpump.cli", "from rotorpump import quantities"),
        (facade_imports, "rotorpump.cli", f"{LATE}from rotorpump import Wheel as W"),
        (facade_imports, "rotorpump.cli", "from . import quantities"),
        (cyclic, "rotorpump.quantities", "from rotorpump.rig.wheel import Wheel"),
        (cyclic, "rotorpump.quantities", "from rotorpump.rig import wheel"),
        (mixed_checks, "rotorpump.checking.audit", "import casadi.tools"),
        (mixed_checks, "rotorpump.quantities", "from rotorpump.solving.ipopt import run"),
        (mixed_checks, "rotorpump.checking.audit", "from rotorpump.laws import lead"),
        (stray_solver_calls, "rotorpump.laws.lead", "import casadi as c\nc.nlpsol('s')"),
        (stray_solver_calls, "rotorpump.laws.lead", "from casadi import nlpsol as n"),
        (unfit_files, "rotorpump.tasks", LICENCE + "\n" * (LONGEST + 1)),
        (unfit_files, "rotorpump.tasks", '"""Tasks."""'),
        (unfit_files, "rotorpump.tasks", ""),
    ],
)
def test_a_broken_rule_is_found(rule, module, text):
    good = {name: f"{LICENCE}\n{source}" for name, source in GOOD.items()}
    assert rule(good) == []
    assert rule(good | {module: text}) != []
