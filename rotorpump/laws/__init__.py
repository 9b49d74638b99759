# SPDX-License-Identifier: BSD-3-Clause
"""Switching laws: the instantaneous ideal, and the practical law with leads."""
