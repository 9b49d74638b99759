# SPDX-License-Identifier: BSD-3-Clause
"""What comes back from a solve or a law, and its files."""
