# SPDX-License-Identifier: BSD-3-Clause
"""Division of arcs into intervals."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.transcription.mesh import FREE, HIGH, LOW, Mesh

UNEVEN = Mesh(
    (np.array([0.25, 0.75]), np.array([0.5, 0.3, 0.2])),
    np.array([[HIGH, FREE, FREE, LOW, FREE]]),
    np.array([[1, -1, 1, 1, -1]]),
    True,
)


def test_uniform_mesh():
    mesh = Mesh.uniform(3, 4, 2, flexible=True)
    assert mesh.intervals == 12
    assert mesh.counts == (4, 4, 4)
    assert mesh.edges.tolist() == [0, 4, 8, 12]
    assert all(share == pytest.approx([0.25] * 4) for share in mesh.shares)
    assert mesh.rests.tolist() == [[FREE] * 12] * 2
    assert mesh.flexible


def test_edges_count_the_intervals():
    assert UNEVEN.counts == (2, 3)
    assert UNEVEN.edges.tolist() == [0, 2, 5]


def test_nodes_stand_at_their_shares():
    times = UNEVEN.node_times([2.0, 12.0])
    assert times == pytest.approx([0.0, 0.5, 2.0, 7.0, 10.0, 12.0])


def test_other_rests_on_the_same_division():
    rests = np.array([[FREE, FREE, HIGH, FREE, FREE]])
    mesh = UNEVEN.with_pattern(rests, -UNEVEN.signs, flexible=False)
    assert mesh.shares is UNEVEN.shares
    assert mesh.rests.tolist() == rests.tolist()
    assert mesh.signs.tolist() == (-UNEVEN.signs).tolist()
    assert not mesh.flexible


@given(st.lists(st.floats(0.01, 3.0), min_size=5, max_size=5))
def test_settled_mesh_puts_the_nodes_where_they_were(lengths):
    nodes = np.concatenate(([0.0], np.cumsum(lengths)))
    mesh = UNEVEN.settled(nodes)
    assert mesh.counts == UNEVEN.counts
    assert [share.sum() for share in mesh.shares] == pytest.approx([1.0, 1.0])
    assert mesh.node_times([nodes[2], nodes[5]]) == pytest.approx(nodes)
    assert mesh.rests.tolist() == UNEVEN.rests.tolist()
    assert mesh.signs.tolist() == UNEVEN.signs.tolist()
    assert mesh.flexible is UNEVEN.flexible


def test_split_keeps_nodes_and_rests():
    pieces = np.array([2, 1, 1, 3, 1])
    finer = UNEVEN.split(pieces)
    assert finer.counts == (3, 5)
    assert [share.sum() for share in finer.shares] == pytest.approx([1.0, 1.0])
    assert finer.rests.tolist() == [[HIGH, HIGH, FREE, FREE, LOW, LOW, LOW, FREE]]
    assert finer.signs.tolist() == [[1, 1, -1, 1, 1, 1, 1, -1]]
    assert finer.flexible is UNEVEN.flexible
    coarse, fine = UNEVEN.node_times([2.0, 12.0]), finer.node_times([2.0, 12.0])
    kept = np.concatenate(([0], np.cumsum(pieces)))
    assert fine[kept] == pytest.approx(coarse)
    assert fine == pytest.approx([0.0, 0.25, 0.5, 2.0, 7.0, 8.0, 9.0, 10.0, 12.0])
