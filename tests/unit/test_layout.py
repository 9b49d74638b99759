# SPDX-License-Identifier: BSD-3-Clause
"""Places of the variables."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.transcription.interval import ANGLE, TIME, WHEEL, Form
from rotorpump.transcription.layout import Layout

FORMS = st.builds(Form, st.sampled_from([TIME, ANGLE]), st.integers(0, 2), st.integers(1, 5))


@given(FORMS, st.integers(1, 5))
def test_every_variable_has_one_place(form, intervals):
    layout = Layout.of(form, intervals)
    places = np.concatenate([layout.node.ravel(), layout.inner.ravel()])
    assert sorted(places.tolist()) == list(range(layout.variables))
    assert layout.intervals == intervals


@given(FORMS, st.integers(1, 5), st.integers(2, 3))
def test_periodic_motion_shares_its_ends(form, intervals, own):
    layout = Layout.of(form, intervals, own_last=own)
    first, last = layout.node[0], layout.node[-1]
    assert last[own:].tolist() == first[own:].tolist()
    assert not set(last[:own].tolist()) & set(first.tolist())
    places = np.concatenate([layout.node[:-1].ravel(), last[:own], layout.inner.ravel()])
    assert sorted(places.tolist()) == list(range(layout.variables))


@given(FORMS, st.integers(1, 5))
def test_kernel_takes_both_nodes_and_the_inner_variables(form, intervals):
    layout = Layout.of(form, intervals)
    width = 2 * form.node + form.inner
    assert layout.places.shape == (intervals, width)
    for k in range(intervals):
        expected = [*layout.node[k], *layout.node[k + 1], *layout.inner[k]]
        assert layout.places[k].tolist() == expected


@pytest.mark.parametrize(("independent", "which"), [(TIME, 1), (ANGLE, 0)])
@pytest.mark.parametrize("degree", [1, 3])
def test_collocated_quantities_run_from_node_to_node(independent, which, degree):
    form = Form(independent, 2, degree)
    layout = Layout.of(form, 4)
    first, momentum = layout.collocated(form)
    for places, column in ((first, which), (momentum, WHEEL - 1)):
        assert places.shape == (4, degree + 1)
        assert places[:, 0].tolist() == layout.node[:-1, column].tolist()
        assert places[:, -1].tolist() == layout.node[1:, column].tolist()
    used = np.concatenate([first[:, 1:-1].ravel(), momentum[:, 1:-1].ravel()])
    free = np.setdiff1d(layout.inner.ravel(), layout.controls.ravel())
    assert sorted(used.tolist()) == free.tolist()
