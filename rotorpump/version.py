# SPDX-License-Identifier: BSD-3-Clause
"""Version of the installed package."""

from __future__ import annotations

from importlib.metadata import PackageNotFoundError, version


def installed_version() -> str:
    """Return the version that was installed, or say that the package runs without installation."""
    try:
        return version("rotorpump")
    except PackageNotFoundError:
        return "0+not.installed"
