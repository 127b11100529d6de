"""One seed, one result: however many workers, however the machine is loaded."""

from concurrent.futures import ThreadPoolExecutor
from dataclasses import replace

import pytest

import axis
from axis.description.wishes import Tolerance
from axis.errors import Stopped
from tests.cli.command import DATA
from tests.tuning.demo import changed

# Its jerk left open, so that every unknown is in play; two tolerances, so that new corners join the search.
RAM = axis.load(DATA / "ram_si.toml")
MOVES = tuple(replace(move, jerk=None) for move in RAM.document.axis.moves)
OPEN = changed(RAM, loops=None, moves=MOVES, tolerance=Tolerance(load_mass=0.05, friction=0.3))
BUDGET = 600


def search(workers: int, seed: int = 5, progress=None):
    with ThreadPoolExecutor(workers) as executor:
        return axis.tune(OPEN, seed, BUDGET, progress, executor).tuned


@pytest.fixture(scope="module")
def alone():
    return search(1)


def test_one_worker_or_two(alone):
    together = search(2)
    assert together.loops == alone.loops
    assert together.runs == alone.runs
    assert together.path == alone.path
    assert together.result == alone.result


def test_another_seed_searches_elsewhere(alone):
    assert search(2, seed=6).loops != alone.loops


def test_progress_rises_to_the_end():
    shares = []
    search(2, progress=lambda share, best: shares.append(share))
    assert shares == sorted(shares)
    assert shares[0] == 0.0
    assert 0.9 <= shares[-1] <= 1.0


def test_a_search_that_is_stopped_keeps_the_best_so_far():
    def stop(share, best):
        if share > 0.3:
            raise Stopped("the user")

    stopped = search(2, progress=stop)
    assert "stopped" in stopped.path[-1].name
    assert stopped.runs < BUDGET
    assert stopped.result.settled.corners == 11
