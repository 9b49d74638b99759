# SPDX-License-Identifier: BSD-3-Clause
"""Pictures; each function takes and returns matplotlib Axes."""
