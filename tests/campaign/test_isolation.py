"""Jobs in child processes: whatever one does, the others and this process go on."""

import ctypes
import faulthandler
import os
import signal
import subprocess
import sys
import time

import pytest

from laplace_verify.campaign.isolation import Failure, can_isolate, run_isolated

pytestmark = pytest.mark.skipif(not can_isolate(), reason="this platform cannot fork")


def raises():
    raise ArithmeticError("no pivot")


def exits():
    sys.exit("giving up")


def dies():
    os.kill(os.getpid(), signal.SIGKILL)


def crashes():
    faulthandler.disable()  # the crash is meant
    ctypes.string_at(0)


def leaves():
    os._exit(3)


def cannot_travel():
    return lambda: None


@pytest.mark.parametrize(
    ("job", "reason"),
    [
        (raises, "ArithmeticError: no pivot"),
        (exits, "SystemExit: giving up"),
        (dies, "ended by SIGKILL"),
        (crashes, "ended by SIGSEGV"),
        (leaves, "exit status 3"),
        (cannot_travel, "cannot be sent"),
    ],
)
def test_a_job_that_breaks_is_a_failure_and_the_others_go_on(job, reason):
    results = dict(run_isolated([lambda: "before", job, lambda: "after"]))
    assert isinstance(results[1], Failure)
    assert reason in results[1].reason
    assert (results[0], results[2]) == ("before", "after")


def test_the_traceback_of_an_exception_is_kept():
    ((_, failure),) = run_isolated([raises])
    assert "in raises" in failure.crash


def test_a_job_that_hangs_is_stopped_with_everything_it_started(tmp_path):
    note = tmp_path / "pid"

    def hangs():
        child = subprocess.Popen([sys.executable, "-c", "import time; time.sleep(60)"])
        note.write_text(str(child.pid))
        time.sleep(60)

    ((_, failure),) = run_isolated([hangs], time_limit=1.0)
    assert failure.reason == "stopped after the time limit of 1 s"
    started = int(note.read_text())
    for _ in range(50):
        status = _state(started)
        if status in ("", "Z"):  # gone, or waiting for its parent to collect it
            return
        time.sleep(0.1)
    pytest.fail(f"process {started} is still {status}")


def _state(pid):
    """Return the state letter of a process on Linux, "" if it is gone."""
    try:
        with open(f"/proc/{pid}/stat", encoding="ascii") as file:
            return file.read().rpartition(")")[2].split()[0]
    except FileNotFoundError:
        return ""


def test_two_workers_run_side_by_side():
    def sleeps():
        time.sleep(0.6)

    start = time.monotonic()
    list(run_isolated([sleeps] * 4, workers=4))
    assert time.monotonic() - start < 1.8  # one after another would take 2.4 s


def test_large_results_travel_whole():
    ((_, result),) = run_isolated([lambda: bytes(5_000_000)])
    assert len(result) == 5_000_000


def test_what_compiled_code_prints_does_not_reach_our_output(capfd):
    list(run_isolated([lambda: os.write(1, b"from below") and None]))
    assert "from below" not in capfd.readouterr().out


def test_nothing_to_do_gives_nothing():
    assert list(run_isolated([])) == []
