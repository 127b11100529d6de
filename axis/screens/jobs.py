"""Long work of the screens: threads outside the sessions, watched by them, with the results they leave behind.

A result keeps the stated axis it was computed from, so that whoever shows it can tell whether it still speaks of the
axis on the screen. Work is looked up by the key of its draft: a reload or another page finds it again.
"""

from __future__ import annotations

import threading
from collections import OrderedDict
from collections.abc import Callable
from dataclasses import dataclass, field, replace

from axis.description.axis import Axis
from axis.errors import SettlepointError, Stopped
from axis.plots.figure import Figure
from axis.study import Study, check, tune

MOST_DRAFTS = 24  # whose results are kept at a time


@dataclass
class Job:
    """One long computation: how far it is, the best so far, how it ended."""

    name: str
    study: Study  # what it computes from
    share: float = 0.0
    best: str = "starting; the first time on a machine the simulation is compiled, for about a minute"
    failed: str = ""  # why there is no result
    ended: bool = False
    seen: bool = False  # a window has taken note of its end
    _stopping: threading.Event = field(default_factory=threading.Event)

    def start(self, work: Callable[[Job], None]) -> None:
        threading.Thread(target=self._run, args=(work,), name=self.name, daemon=True).start()

    def stop(self) -> None:
        """Ask it to end; a search then keeps the best it has verified."""
        self._stopping.set()

    @property
    def stopping(self) -> bool:
        return self._stopping.is_set()

    def progress(self, share: float, best: str) -> None:
        """What the computation calls now and then."""
        self.share, self.best = min(max(share, self.share), 1.0), best
        if self.stopping:
            raise Stopped("stopped")

    def _run(self, work: Callable[[Job], None]) -> None:
        try:
            work(self)
        except SettlepointError as error:
            self.failed = str(error)
        except Exception as error:
            self.failed = f"internal error, please report it with the axis file: {type(error).__name__}: {error}"
        finally:
            self.ended = True


@dataclass
class Results:
    """What is known of one draft."""

    sized: Study | None = None
    tuned: Study | None = None
    settled: Study | None = None
    tuning: Job | None = None
    checking: Job | None = None
    figures: dict[int, Figure] = field(default_factory=dict)  # tail of each move of `settled`, as far as drawn
    before: dict[int, Figure] = field(default_factory=dict)  # the same of what was settled before

    def is_tuned(self, axis: Axis) -> bool:
        """Whether the search was made for this axis; the settings in its file play no part in it."""
        return self.tuned is not None and without_loops(self.tuned.document.axis) == without_loops(axis)

    def is_settled(self, axis: Axis) -> bool:
        """Whether the simulated cycles are those of this axis under these settings."""
        return self.settled is not None and self.settled.document.axis == axis

    def settle(self, found: Study) -> None:
        """Take over newly simulated cycles; the pictures of those before stay for comparison."""
        if self.figures:
            self.before = self.figures
        self.figures, self.settled = {}, found

    def start_tuning(self, study: Study, seed: int, runs: int) -> None:
        """Search settings for the axis; what was being searched or checked before is stopped."""

        def work(job: Job) -> None:
            found = tune(study, seed, runs, job.progress)
            self.tuned = found
            self.settle(found)

        self.stop()
        self.tuning = Job("tuning", study)
        self.tuning.start(work)

    def start_checking(self, study: Study) -> None:
        """Simulate the settings at every corner, unless that is under way already."""

        def work(job: Job) -> None:
            found = check(study, job.progress)
            if not job.stopping:
                self.settle(found)

        running = self.checking
        same = running is not None and running.study.document.axis == study.document.axis
        if running is not None and same and (running.failed or not running.ended):
            return  # under way, or without a result for this very axis: that is told, not tried for ever
        if running is not None:
            running.stop()
        self.checking = Job("check", study)
        self.checking.start(work)

    def check_again(self, study: Study) -> None:
        """Try once more what ended without a result."""
        self.checking = None
        self.start_checking(study)

    def stop(self) -> None:
        for job in (self.tuning, self.checking):
            if job is not None:
                job.stop()


class Board:
    """The results of every draft that was worked on lately."""

    def __init__(self) -> None:
        self._lock = threading.Lock()
        self._results: OrderedDict[str, Results] = OrderedDict()

    def of(self, key: str) -> Results:
        with self._lock:
            found = self._results.setdefault(key, Results())
            self._results.move_to_end(key)
            while len(self._results) > MOST_DRAFTS:
                _, oldest = self._results.popitem(last=False)
                oldest.stop()
            return found

    def copy(self, old: str, new: str) -> None:
        """A draft that goes on under a new key takes its results along; work under way stays with the old one."""
        before = self.of(old)
        with self._lock:
            self._results[new] = replace(before, tuning=None, checking=None, figures=dict(before.figures))


def without_loops(axis: Axis) -> Axis:
    return replace(axis, loops=None)
