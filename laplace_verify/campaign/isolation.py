"""Jobs in child processes, a few at a time: one that hangs, crashes or is killed harms no other.

Children are forked, so a solver need not be picklable; its results travel back through a pipe, and each
child leads a process group of its own, so that a time limit ends whatever it started. Where the platform
cannot fork, jobs run in this process one after another, and time limits cannot be kept.
"""

from __future__ import annotations

import contextlib
import multiprocessing
import os
import signal
import time
import warnings
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from multiprocessing.connection import Connection, wait
from typing import Any

from laplace_verify.errors import history, told

__all__ = ["Failure", "can_isolate", "run_isolated"]

Job = Callable[[], Any]


@dataclass(frozen=True, slots=True, kw_only=True)
class Failure:
    """Why a job gave no result: one sentence, and a traceback if there is one."""

    reason: str
    crash: str = ""


@dataclass(slots=True)
class _Child:
    """A running job: its place in the list, its process, the end of the pipe we read."""

    index: int
    process: multiprocessing.process.BaseProcess
    pipe: Connection
    deadline: float


def can_isolate() -> bool:
    """Return whether this platform can fork."""
    return "fork" in multiprocessing.get_all_start_methods()


def run_isolated(
    jobs: Sequence[Job], workers: int = 1, time_limit: float | None = None
) -> Iterator[tuple[int, Any]]:
    """Run every job in a child process of its own and yield (index, result) as they end.

    Parameters
    ----------
    jobs
        Functions without arguments; what they return must be picklable.
    workers
        How many run at the same time, >= 1.
    time_limit
        Seconds after which a job's process group is killed; None: never.

    Yields
    ------
    (index, result)
        A `Failure` takes the place of a result if the job raised, was killed or ran out of time.
    """
    if not can_isolate():
        for index, job in enumerate(jobs):
            yield index, _attempt(job)
        return
    waiting = iter(enumerate(jobs))
    running: list[_Child] = []
    try:
        while True:
            for index, job in waiting:
                running.append(_start(index, job, time_limit))
                if len(running) >= workers:
                    break
            if not running:
                return
            yield from _finished(running, time_limit)
    finally:
        for child in running:
            _end(child)


def _attempt(job: Job) -> Any:
    """Return what the job returns, or a Failure if it raises."""
    try:
        return job()
    except (Exception, SystemExit) as cause:
        return Failure(reason=told(cause), crash=history(cause))


def _start(index: int, job: Job, time_limit: float | None) -> _Child:
    """Fork a child for the job."""
    context = multiprocessing.get_context("fork")
    ours, theirs = context.Pipe(duplex=False)
    process = context.Process(target=_serve, args=(job, theirs), daemon=False)
    with warnings.catch_warnings():
        # Python 3.12 warns of threads at a fork; idle BLAS threads are safe, and no other thread is ours.
        warnings.simplefilter("ignore", DeprecationWarning)
        process.start()
    theirs.close()
    deadline = time.monotonic() + time_limit if time_limit is not None else float("inf")
    return _Child(index, process, ours, deadline)


def _serve(job: Job, pipe: Connection) -> None:
    """Run the job in the child and send its result."""
    os.setsid()
    os.dup2(2, 1)  # what compiled code prints must not mix with the results of the parent
    try:
        result = _attempt(job)
    except BaseException as cause:  # the parent is told what ended its child, whatever it was
        result = Failure(reason=told(cause), crash=history(cause))
    try:
        pipe.send(result)
    except Exception as cause:
        pipe.send(Failure(reason=f"the result cannot be sent between processes: {told(cause)}"))
    pipe.close()


def _finished(running: list[_Child], time_limit: float | None) -> Iterator[tuple[int, Any]]:
    """Wait for children to end or run out of time; yield their results and forget them."""
    pause = max(0.0, min(child.deadline for child in running) - time.monotonic())
    ready = wait([child.pipe for child in running], timeout=None if pause == float("inf") else pause)
    for child in list(running):
        if child.pipe in ready:
            result = _received(child)
        elif time.monotonic() >= child.deadline:
            result = Failure(reason=f"stopped after the time limit of {time_limit:g} s")
        else:
            continue
        running.remove(child)
        _end(child)
        yield child.index, result


def _received(child: _Child) -> Any:
    """Return what the child sent, or how it ended without sending anything."""
    try:
        return child.pipe.recv()
    except EOFError:
        child.process.join()
        return Failure(reason=_how_it_ended(child.process.exitcode))
    except Exception as cause:
        return Failure(reason=f"the result cannot be read: {told(cause)}")


def _how_it_ended(code: int | None) -> str:
    """Describe an exit status."""
    if code is not None and code < 0:
        with contextlib.suppress(ValueError):
            return f"the solver's process was ended by {signal.Signals(-code).name}"
    return f"the solver's process ended with exit status {code} and gave no answer"


def _end(child: _Child) -> None:
    """Kill what is left of the child's process group and collect it."""
    with contextlib.suppress(ProcessLookupError, PermissionError):
        if child.process.pid is not None:
            os.killpg(child.process.pid, signal.SIGKILL)
    child.pipe.close()
    child.process.join(timeout=5)
    if child.process.is_alive():
        child.process.kill()
        child.process.join()
