# SPDX-License-Identifier: BSD-3-Clause
"""The only callers of the solver."""
