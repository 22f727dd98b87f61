"""Many folders issued side by side, each in a process of its own."""

from __future__ import annotations

import contextlib
import multiprocessing
import os
import signal
import threading
from collections.abc import Generator, Sequence
from multiprocessing.connection import Connection, wait
from multiprocessing.context import SpawnProcess
from pathlib import Path

from calc.cli.making import Say, lost, of_one
from calc.cli.outcome import Outcome

GRACE = 2.0
"""Seconds in which a process that is told to end may tidy up."""


class Hand:
    """A process that issues one folder, and the pipe by which it tells what came of it."""

    def __init__(self, folder: Path, purpose: str, out: Path | None) -> None:
        self.folder = folder
        context = multiprocessing.get_context("spawn")
        self.told, telling = context.Pipe(duplex=False)
        self.process: SpawnProcess = context.Process(target=_work, args=(telling, folder, purpose, out))
        with _interrupts_left_to_parent():
            self.process.start()
        telling.close()

    def outcome(self) -> Outcome:
        """Return what came of the folder; waits for it."""
        try:
            found: Outcome = self.told.recv()
        except (EOFError, OSError):
            found = lost(self.folder)
        self.process.join()
        return found

    def end(self) -> None:
        """End the process, which was told to; harder after a while."""
        self.process.join(GRACE)
        self.process.kill()
        self.process.join()


def side_by_side(folders: Sequence[Path], purpose: str, out: Path | None, say: Say) -> list[Outcome]:
    """Issue folders in parallel, and return what each came to, in their order."""
    waiting = list(folders)
    at_work: dict[Connection, Hand] = {}
    found: dict[Path, Outcome] = {}
    try:
        while waiting or at_work:
            while waiting and len(at_work) < _processors():
                hand = Hand(waiting.pop(0), purpose, out)
                at_work[hand.told] = hand
            for ready in wait(list(at_work)):
                hand = at_work[ready]  # type: ignore[index]
                found[hand.folder] = hand.outcome()
                del at_work[hand.told]
            say(f"issued {len(found)} of {len(folders)}")
    finally:
        for hand in at_work.values():
            hand.process.terminate()
        for hand in at_work.values():
            hand.end()
    return [found[folder] for folder in folders]


def _processors() -> int:
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


def _work(telling: Connection, folder: Path, purpose: str, out: Path | None) -> None:
    """Issue one folder; when told to end meanwhile, what was written aside is taken away."""
    signal.signal(signal.SIGTERM, signal.default_int_handler)
    told = of_one(folder, purpose, out)
    signal.signal(signal.SIGTERM, signal.SIG_DFL)
    with contextlib.suppress(OSError):  # nobody listens any more
        telling.send(told)


@contextlib.contextmanager
def _interrupts_left_to_parent() -> Generator[None, None, None]:
    """Start children that ignore Ctrl-C: the parent hears it, and ends them."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    before = signal.signal(signal.SIGINT, signal.SIG_IGN)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
