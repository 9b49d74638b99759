# SPDX-License-Identifier: BSD-3-Clause
"""Places of the variables."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.transcription.form import ANGLE, TIME, AxisForm, Form
from rotorpump.transcription.layout import Layout

AXES = st.builds(AxisForm, st.just("radial"), st.integers(0, 3)).flatmap(
    lambda radial: st.sampled_from([(radial,), (radial, AxisForm("tangential", 2))])
)
FORMS = st.builds(
    Form,
    st.sampled_from([TIME, ANGLE]),
    AXES,
    st.integers(1, 5),
    sums=st.sampled_from([(), ("work",), ("heat", "radial_square")]),
)


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
    width = 2 * len(form.node) + form.inner
    assert layout.places.shape == (intervals, width)
    for k in range(intervals):
        expected = [*layout.node[k], *layout.node[k + 1], *layout.inner[k]]
        assert layout.places[k].tolist() == expected


@pytest.mark.parametrize(("independent", "leading"), [(TIME, "angle"), (ANGLE, "time")])
@pytest.mark.parametrize("degree", [1, 3])
def test_collocated_quantities_run_from_node_to_node(independent, leading, degree):
    form = Form(independent, (AxisForm("radial", 2),), degree)
    layout = Layout.of(form, 4)
    for places, name in zip(layout.collocated, (leading, "momentum"), strict=True):
        assert places.shape == (4, degree + 1)
        assert places[:, 0].tolist() == layout.nodes(name)[:-1].tolist()
        assert places[:, -1].tolist() == layout.nodes(name)[1:].tolist()
    used = np.concatenate([places[:, 1:-1].ravel() for places in layout.collocated])
    free = np.setdiff1d(layout.inner.ravel(), layout.controls(0).ravel())
    assert sorted(used.tolist()) == free.tolist()


@given(FORMS)
def test_inner_variables_are_collocated_values_controls_and_slacks(form):
    layout = Layout.of(form, 2)
    controls = [layout.controls(k) for k in range(len(form.axes))]
    inner = [places[:, 1:-1] for places in layout.collocated]
    everything = [part.ravel() for part in (*inner, *controls, layout.slacks)]
    assert sorted(np.concatenate(everything).tolist()) == sorted(layout.inner.ravel().tolist())


def test_a_periodic_motion_shares_all_but_time_angle_and_sums():
    form = Form(ANGLE, (AxisForm("radial", 2),), sums=("work",))
    assert form.node[: form.index("momentum")] == ("time", "angle", "work")
