# SPDX-License-Identifier: BSD-3-Clause
"""A nonlinear program put together from small functions that repeat along the motion.

Each block is one scalar-symbolic function of a few variables, mapped over many index sets. Its
first and second derivatives are built once, for one copy; the derivatives of the whole program
are sums of mapped copies, so that building takes no longer for many intervals than for few.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import casadi
import numpy as np
from numpy.typing import NDArray

Indices = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class Kernel:
    """One copy of a block: rows(variables, own parameters, shared parameters) and derivatives.

    Parameters
    ----------
    rows : casadi.Function
        (z, q, p) to the values of the rows.
    jacobian : casadi.Function
        (z, q, p) to the rows and the nonzeros of their Jacobian.
    hessian : casadi.Function
        (z, q, p, multipliers) to the nonzeros of the upper triangle of the weighted Hessian.
    jacobian_pattern, hessian_pattern : tuple of ndarray
        Rows and columns of those nonzeros.
    """

    rows: Any
    jacobian: Any
    hessian: Any
    jacobian_pattern: tuple[Indices, Indices]
    hessian_pattern: tuple[Indices, Indices]

    @classmethod
    def build(cls, variables: Any, own: Any, shared: Any, rows: Any) -> Kernel:
        """Differentiate ``rows`` with respect to ``variables``."""
        weights = casadi.SX.sym("w", rows.numel())
        jac = casadi.jacobian(rows, variables)
        hess = casadi.triu(casadi.hessian(casadi.dot(weights, rows), variables)[0])
        inputs = [variables, own, shared]
        options = {"cse": True}
        return cls(
            casadi.Function("rows", inputs, [rows], options),
            casadi.Function("jacobian", inputs, [rows, _nonzeros(jac)], options),
            casadi.Function("hessian", [*inputs, weights], [_nonzeros(hess)], options),
            _pattern(jac),
            _pattern(hess),
        )


def _nonzeros(matrix: Any) -> Any:
    """Nonzeros of a sparse symbolic matrix as a dense column."""
    entries = matrix.nonzeros()
    return casadi.vertcat(*entries) if entries else casadi.SX(0, 1)


def _pattern(matrix: Any) -> tuple[Indices, Indices]:
    rows, columns = matrix.sparsity().get_triplet()
    return np.array(rows, dtype=np.intp), np.array(columns, dtype=np.intp)


@dataclass(frozen=True, eq=False)
class Block:
    """A kernel with the places where it stands.

    Parameters
    ----------
    kernel : Kernel
        The function that repeats.
    places : ndarray of int, shape (copies, variables)
        Which variables of the program each copy takes.
    own : ndarray, shape (copies, own parameters)
        Parameters of each copy.
    """

    kernel: Kernel
    places: Indices
    own: NDArray[np.float64]

    @property
    def copies(self) -> int:
        """Number of copies."""
        return int(self.places.shape[0])

    @property
    def rows(self) -> int:
        """Rows of one copy."""
        return int(self.kernel.rows.numel_out(0))


@dataclass(frozen=True, eq=False)
class Functions:
    """The program's functions, in the form in which the solver takes them."""

    variables: int
    program: dict[str, Any]
    derivatives: dict[str, Any]


def assemble(
    variables: int, shared: int, constraints: Sequence[Block], objectives: Sequence[Block]
) -> Functions:
    """Sum the blocks into one program with exact first and second derivatives.

    The parameter vector of the program is the shared parameters followed by the own parameters of
    each block, copy by copy: constraints first, then objectives.
    """
    sizes = [block.own.size for block in (*constraints, *objectives)]
    x = casadi.MX.sym("x", variables)
    p = casadi.MX.sym("p", shared + sum(sizes))
    starts = shared + np.concatenate(([0], np.cumsum(sizes))).astype(int)
    entries = [
        _Placed(block, x, p[:shared], p[int(a) : int(a) + block.own.size])
        for block, a in zip((*constraints, *objectives), starts, strict=False)
    ]
    bound, summed = entries[: len(constraints)], entries[len(constraints) :]
    lam_f = casadi.MX.sym("lam_f")
    lam_g = casadi.MX.sym("lam_g", sum(e.block.rows * e.block.copies for e in bound))

    g = casadi.vertcat(*[casadi.vec(e.rows()) for e in bound])
    f = sum((casadi.sum1(casadi.vec(e.rows())) for e in summed), casadi.MX(0.0))
    offset, jac_entries, hess_entries = 0, [], []
    for entry in bound:
        values, rows, columns = entry.jacobian_entries()
        jac_entries.append((values, rows + offset, columns))
        count = entry.block.rows * entry.block.copies
        hess_entries.append(entry.hessian_entries(lam_g[offset : offset + count]))
        offset += count
    grad_entries = []
    for entry in summed:
        values, rows, columns = entry.jacobian_entries()
        grad_entries.append((values, 0 * rows, columns))
        count = entry.block.rows * entry.block.copies
        hess_entries.append(entry.hessian_entries(casadi.repmat(lam_f, count, 1)))
    jac = _scatter(jac_entries, (g.numel(), variables))
    grad = _scatter(grad_entries, (1, variables))
    hess = _scatter(hess_entries, (variables, variables))
    return Functions(
        variables,
        {"x": x, "p": p, "f": f, "g": g},
        {
            "jac_g": casadi.Function("jac_g", [x, p], [g, jac], ["x", "p"], ["g", "jac_g_x"]),
            "grad_f": casadi.Function(
                "grad_f", [x, p], [f, casadi.densify(grad).T], ["x", "p"], ["f", "grad_f_x"]
            ),
            "hess_lag": casadi.Function(
                "hess_lag",
                [x, p, lam_f, lam_g],
                [hess],
                ["x", "p", "lam_f", "lam_g"],
                ["triu_hess_gamma_x_x"],
            ),
        },
    )


class _Placed:
    """A block bound to the symbols of the program."""

    def __init__(self, block: Block, x: Any, shared: Any, own: Any) -> None:
        self.block = block
        order = [int(i) for i in block.places.ravel()]
        self._inputs = (
            casadi.reshape(x[order], block.places.shape[1], block.copies),
            casadi.reshape(own, block.own.shape[1], block.copies),
            shared,
        )

    def _mapped(self, function: Any) -> Any:
        return function.map("mapped", "serial", self.block.copies, [2], [])

    def rows(self) -> Any:
        """Values, one column a copy."""
        return self._mapped(self.block.kernel.rows)(*self._inputs)

    def jacobian_entries(self) -> tuple[Any, Indices, Indices]:
        """Values, rows and columns of the Jacobian's nonzeros, copy by copy."""
        rows, columns = self.block.kernel.jacobian_pattern
        values = self._mapped(self.block.kernel.jacobian)(*self._inputs)[1]
        shift = np.arange(self.block.copies)[:, None] * self.block.rows
        return casadi.vec(values), (shift + rows).ravel(), self.block.places[:, columns].ravel()

    def hessian_entries(self, multipliers: Any) -> tuple[Any, Indices, Indices]:
        """Values, rows and columns of the weighted Hessian's nonzeros in the upper triangle."""
        rows, columns = self.block.kernel.hessian_pattern
        weights = casadi.reshape(multipliers, self.block.rows, self.block.copies)
        values = self._mapped(self.block.kernel.hessian)(*self._inputs, weights)
        first = self.block.places[:, rows].ravel()
        second = self.block.places[:, columns].ravel()
        doubled = np.broadcast_to(rows != columns, (self.block.copies, rows.size)).ravel()
        # Two local variables may be one variable of the program (a periodic motion of one
        # interval): an off-diagonal entry then counts twice on the diagonal.
        factor = np.where((first == second) & doubled, 2.0, 1.0)
        values = casadi.vec(values) * casadi.DM(factor)
        return values, np.minimum(first, second), np.maximum(first, second)


def _scatter(entries: Sequence[tuple[Any, Indices, Indices]], shape: tuple[int, int]) -> Any:
    """Sum values, given with their rows and columns, into a sparse matrix."""
    rows = np.concatenate([rows for _, rows, _ in entries])
    columns = np.concatenate([columns for _, _, columns in entries])
    values = casadi.vertcat(*[v for v, _, _ in entries])
    keys, slot = np.unique(columns.astype(np.int64) * shape[0] + rows, return_inverse=True)
    pattern = casadi.Sparsity.triplet(
        *shape, (keys % shape[0]).tolist(), (keys // shape[0]).tolist()
    )
    ones = casadi.DM.ones(rows.size)
    summing = casadi.DM.triplet(slot.tolist(), list(range(rows.size)), ones, keys.size, rows.size)
    return casadi.MX(pattern, casadi.mtimes(summing, values))
