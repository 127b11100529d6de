"""Long work outside the sessions: progress, stopping, failing, and results that know what they belong to."""

import threading
from collections.abc import Callable
from dataclasses import replace
from typing import Any

import pytest

from axis.errors import NotComputable
from axis.screens import jobs
from axis.screens.jobs import MOST_DRAFTS, Board, Job, Results
from axis.study import Study
from tests.sheet.sample import study

WAIT = 30.0  # [s] a watchdog, never reached


def ended(job: Job) -> Job:
    for thread in threading.enumerate():
        if thread.name == job.name:
            thread.join(WAIT)
    assert job.ended
    return job


def started(work: Callable[[Job], None]) -> Job:
    job = Job("a job of the tests", study())
    job.start(work)
    return job


def test_a_job_tells_how_far_it_is_and_never_goes_back() -> None:
    def work(job: Job) -> None:
        job.progress(0.5, "half")
        job.progress(0.2, "later, with less")

    job = ended(started(work))
    assert (job.share, job.best, job.failed) == (0.5, "later, with less", "")


def test_a_job_that_is_asked_to_stop_stops_at_its_next_word() -> None:
    begun = threading.Event()

    def work(job: Job) -> None:
        begun.set()
        while True:
            job.progress(0.1, "going on")

    job = started(work)
    assert begun.wait(WAIT)
    job.stop()
    assert ended(job).failed == "stopped"


@pytest.mark.parametrize(
    ("error", "said"),
    [(NotComputable("no design holds"), "no design holds"), (ValueError("odd"), "internal error")],
)
def test_a_job_that_fails_says_why(error: Exception, said: str) -> None:
    def work(job: Job) -> None:
        raise error

    assert said in ended(started(work)).failed


def test_results_belong_to_the_axis_they_were_computed_from() -> None:
    sample = study()
    axis = sample.document.axis
    known = Results(tuned=sample, settled=sample)
    heavier = replace(axis, load=replace(axis.load, mass=99.0))
    other_settings = replace(axis, loops=None)
    assert known.is_tuned(axis)
    assert known.is_settled(axis)
    assert known.is_tuned(other_settings), "a search does not depend on the settings in the file"
    assert not known.is_settled(other_settings)
    assert not known.is_tuned(heavier)
    assert not known.is_settled(heavier)


def test_a_check_of_another_axis_stops_the_one_before(monkeypatch: pytest.MonkeyPatch) -> None:
    def endless(study: Study, progress: Any) -> Study:
        while True:
            progress(0.1, "going on")

    monkeypatch.setattr(jobs, "check", endless)
    sample, known = study(), Results()
    known.start_checking(sample)
    first = known.checking
    known.start_checking(sample)
    assert known.checking is first, "the same axis is not checked twice"
    axis = replace(sample.document.axis, tolerance=replace(sample.document.axis.tolerance, friction=0.1))
    known.start_checking(replace(sample, document=replace(sample.document, axis=axis)))
    assert first is not None
    assert first.stopping
    assert known.checking is not first
    known.stop()


def test_an_axis_that_comes_back_is_checked_again(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(jobs, "check", lambda study, progress: study)
    sample, known = study(), Results()
    known.start_checking(sample)
    assert known.checking is not None
    first = ended(known.checking)
    assert known.settled is sample
    known.settle(replace(sample, document=replace(sample.document, axis=replace(sample.document.axis, loops=None))))
    known.start_checking(sample)
    assert known.checking is not first
    ended(known.checking)
    assert known.is_settled(sample.document.axis)


def test_a_copied_draft_takes_its_results_along_and_old_drafts_are_let_go() -> None:
    board = Board()
    board.of("old").settled = study()
    board.copy("old", "new")
    assert board.of("new").settled is board.of("old").settled
    board.of("new").settled = None
    assert board.of("old").settled is not None
    for n in range(MOST_DRAFTS):
        board.of(str(n))
    assert board.of("old").settled is None
