# SPDX-License-Identifier: BSD-3-Clause
"""The task as a nonlinear program, and the way back."""
