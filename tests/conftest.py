# SPDX-License-Identifier: BSD-3-Clause
"""Settings of the whole suite."""

from __future__ import annotations

from hypothesis import settings

# The same examples in every run: a gate that fails now and then tells nobody anything.
settings.register_profile("steady", derandomize=True, deadline=None)
settings.load_profile("steady")
