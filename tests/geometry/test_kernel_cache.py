"""The kernel without a folder for what it has compiled."""

from __future__ import annotations

import subprocess
import sys


def test_the_kernel_compiles_where_nothing_can_be_kept() -> None:
    """As in an installation that may not be written, by a user without a home."""
    code = (
        "import numba.core.caching as caching\n"
        "for kind in (caching.CacheImpl, *caching.CacheImpl.__subclasses__()):\n"
        "    kind._locator_classes = []\n"
        "from fzconnect.geometry import kernel\n"
        "assert kernel._crossing(1.0, -3.0) == 0.25\n"
        "assert not kernel._crossing.stats.cache_path\n"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
