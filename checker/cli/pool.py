"""Many boards in worker processes: one board a task, results in the order asked for.

A worker that dies takes down its board alone. Where the system can, workers are forks of a process that has imported
everything once; elsewhere they are started anew, with the working folder kept off the import path.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Callable, Sequence
from multiprocessing import connection, get_context
from multiprocessing.connection import Connection
from multiprocessing.process import BaseProcess
from pathlib import Path
from typing import Any, Generic, TypeVar

from checker.cli.process import one_thread

AnswerT = TypeVar("AnswerT")
PATIENCE_S = 1.0
"""How often a worker without work looks whether its parent is still there."""


class Pool(Generic[AnswerT]):
    """`task` is called with a number from 0 on, in any worker; it must be a function that a process can be handed.

    `lost` makes the answer for a task whose worker died, from what is known of the death.
    """

    def __init__(self, task: Callable[[int], AnswerT], lost: Callable[[int, str], AnswerT], workers: int) -> None:
        self.task, self.lost, self.size = task, lost, workers
        self.workers: dict[Connection, tuple[BaseProcess, int]] = {}
        self.leaving: list[BaseProcess] = []
        self.context: Any = get_context("fork" if _may_fork() else "spawn")

    def run(self, count: int, told: Callable[[], None]) -> list[AnswerT]:
        """The answers to tasks 0 to count - 1; `told` is called as each arrives."""
        answers: dict[int, AnswerT] = {}
        waiting = list(reversed(range(count)))
        try:
            for _ in range(min(self.size, count)):
                self._start(waiting.pop())
            while self.workers:
                for ready in connection.wait(list(self.workers)):
                    assert isinstance(ready, Connection)  # noqa: S101 - nothing else is waited for
                    number, answer = self._answer(ready)
                    answers[number] = answer
                    told()
                    self._next(ready, waiting)
        finally:
            self._stop()
        return [answers[number] for number in range(count)]

    def _start(self, number: int) -> None:
        here, there = self.context.Pipe()
        others = [*self.workers, here] if _may_fork() else []
        process = self.context.Process(target=_work, args=(there, self.task, os.getpid(), others), daemon=True)
        process.start()
        there.close()
        here.send(number)
        self.workers[here] = process, number

    def _answer(self, worker: Connection) -> tuple[int, AnswerT]:
        process, number = self.workers[worker]
        try:
            return number, worker.recv()
        except (EOFError, OSError):
            process.join()
            return number, self.lost(number, f"its process ended with {process.exitcode}")

    def _next(self, worker: Connection, waiting: list[int]) -> None:
        """Give the worker its next task, or a new worker where it died."""
        process, _ = self.workers[worker]
        if waiting and process.is_alive():
            number = waiting.pop()
            worker.send(number)
            self.workers[worker] = process, number
            return
        del self.workers[worker]
        worker.close()  # a living one reads the end and leaves
        self.leaving.append(process)
        if waiting:
            self._start(waiting.pop())

    def _stop(self) -> None:
        for worker, (process, _) in self.workers.items():
            worker.close()
            process.terminate()
            self.leaving.append(process)
        for process in self.leaving:
            process.join()


def workers(asked: int | None, count: int) -> int:
    """How many workers to use for `count` boards: as asked, else one for each processor that we may use."""
    usable = len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1
    return max(1, min(asked or usable, count))


def prepare() -> None:
    """Before numpy is imported: one thread a process, since the boards themselves are what runs side by side; and no
    module is taken from the working folder by a worker that is started anew.
    """
    os.environ["PYTHONSAFEPATH"] = "1"
    one_thread()


def _may_fork() -> bool:
    """Linux, and a process of one thread: a fork of several may hang."""
    tasks = Path("/proc/self/task")
    return sys.platform == "linux" and tasks.is_dir() and len(list(tasks.iterdir())) == 1


def _work(there: Connection, task: Callable[[int], Any], parent: int, others: Sequence[Connection]) -> None:
    """What a worker does until its parent goes away. Interrupts from the keyboard are the parent's business."""
    import signal

    signal.signal(signal.SIGINT, signal.SIG_IGN)
    for other in others:
        other.close()
    try:
        while True:
            while not there.poll(PATIENCE_S):
                if os.getppid() != parent:
                    return
            there.send(task(there.recv()))
    except (EOFError, OSError):
        return
