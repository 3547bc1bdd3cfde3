"""For every test: no leaked precision; a rotating share of slow and long tests unless all are asked for."""

from __future__ import annotations

import time
import zlib
from collections.abc import Iterator

import mpmath
import pytest

SHARES = {"long": 100, "slow": 10}  # one test in so many runs by default


def pytest_addoption(parser: pytest.Parser) -> None:
    parser.addoption("--all", action="store_true", help="run every slow and long test, not a share of them")
    parser.addoption(
        "--slow-seed",
        type=int,
        default=int(time.time() // 86400),
        help="which share of the slow and long tests runs (default: changes every day)",
    )


def pytest_report_header(config: pytest.Config) -> str:
    if config.getoption("--all"):
        return "slow and long tests: all"
    shares = ", ".join(f"one {name} test in {share}" for name, share in SHARES.items())
    return f"{shares}, chosen by --slow-seed {config.getoption('--slow-seed')}"


def pytest_collection_modifyitems(config: pytest.Config, items: list[pytest.Item]) -> None:
    if config.getoption("--all"):
        return
    seed = config.getoption("--slow-seed")

    def chosen(item: pytest.Item) -> bool:
        marks = [name for name in SHARES if item.get_closest_marker(name) is not None]
        return not marks or (zlib.crc32(item.nodeid.encode()) + seed) % SHARES[marks[0]] == 0

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
