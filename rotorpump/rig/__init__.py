# SPDX-License-Identifier: BSD-3-Clause
"""What the machine is: wheel, slide, axle friction, and the rig they make."""
