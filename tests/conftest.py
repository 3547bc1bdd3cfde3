"""For every test: no leaked precision; a rotating tenth of the slow tests unless all are asked for."""

from __future__ import annotations

import time
import zlib
from collections.abc import Iterator

import mpmath
import pytest

SHARE = 10  # one slow test in SHARE runs by default


def pytest_addoption(parser: pytest.Parser) -> None:
    parser.addoption("--all", action="store_true", help="run every slow test, not a rotating tenth of them")
    parser.addoption(
        "--slow-seed",
        type=int,
        default=int(time.time() // 86400),
        help="which tenth of the slow tests runs (default: changes every day)",
    )


def pytest_report_header(config: pytest.Config) -> str:
    if config.getoption("--all"):
        return "slow tests: all"
    return f"slow tests: one in {SHARE}, chosen by --slow-seed {config.getoption('--slow-seed')}"


def pytest_collection_modifyitems(config: pytest.Config, items: list[pytest.Item]) -> None:
    if config.getoption("--all"):
        return
    seed = config.getoption("--slow-seed")

    def chosen(item: pytest.Item) -> bool:
        slow = item.get_closest_marker("slow") is not None
        return not slow or (zlib.crc32(item.nodeid.encode()) + seed) % SHARE == 0

    left_out = [item for item in items if not chosen(item)]
    if left_out:
        config.hook.pytest_deselected(items=left_out)
        items[:] = [item for item in items if chosen(item)]


@pytest.fixture(autouse=True)
def _precision_is_left_alone() -> Iterator[None]:
    """Fail a test that leaves mpmath's global precision changed."""
    before = mpmath.mp.prec
    yield
    after = mpmath.mp.prec
    mpmath.mp.prec = before
    assert after == before, f"mpmath precision changed from {before} to {after} bits"
