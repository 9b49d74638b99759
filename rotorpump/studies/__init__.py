# SPDX-License-Identifier: BSD-3-Clause
"""Studies that set several motions side by side."""
