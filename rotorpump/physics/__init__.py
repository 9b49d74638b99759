# SPDX-License-Identifier: BSD-3-Clause
"""The motion of the rig: equations, friction, loads, energy, simulation."""
