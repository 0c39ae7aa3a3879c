"""Bounds within which damaged input must end: memory of this process, and time."""

from __future__ import annotations

import pytest

ONE_GB = 2**30


def _virtual_memory() -> int:
    with open("/proc/self/statm", encoding="ascii") as file:
        return int(file.read().split()[0]) * 4096


@pytest.fixture(autouse=True, scope="module")
def no_more_than_one_gb():
    """Let this process have 1 GB more than it has: what wants more fails with a MemoryError.

    A browser that a later file starts would inherit the bound, so it ends with each file.
    """
    try:
        import resource

        before = resource.getrlimit(resource.RLIMIT_AS)
        allowed = _virtual_memory() + ONE_GB
    except (ImportError, FileNotFoundError):
        # Not a system that can bound it; the time is bounded everywhere.
        yield
        return
    resource.setrlimit(resource.RLIMIT_AS, (allowed, before[1]))
    yield
    resource.setrlimit(resource.RLIMIT_AS, before)
