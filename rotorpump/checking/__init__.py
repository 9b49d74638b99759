# SPDX-License-Identifier: BSD-3-Clause
"""Checks that share no code with transcription and solving."""
