# SPDX-License-Identifier: BSD-3-Clause
"""The command line as ``python -m rotorpump``."""

from __future__ import annotations

import sys

from rotorpump.cli import main

if __name__ == "__main__":
    sys.exit(main())
