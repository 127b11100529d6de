"""Tuning: designed start, search on the simulation at the worst corner, verification at every corner."""

from __future__ import annotations

import math
from collections.abc import Callable
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np

from axis.completion import CompletedAxis
from axis.description.corners import corners
from axis.description.settings import Loops
from axis.errors import Stopped
from axis.loops.lag import velocity_loop_lags
from axis.loops.start import Designed, designed_start
from axis.loops.textbook import textbook_settings
from axis.settling.check import check
from axis.sizing.bound import bounds
from axis.tuning.evolution import Population, generations
from axis.tuning.objective import VIOLATION_SCORE, Corner, Objective, extreme_plants
from axis.tuning.reference import margins_everywhere, reference
from axis.tuning.result import Reference, Step, Tuned
from axis.tuning.start import bare_loops, own_band
from axis.tuning.variables import Space, rounded, space

POPULATION = 32
SCREENED = 640  # random points judged on their margins alone
GENERATIONS = 10  # between two looks at all corners
NEW_CORNERS = 2  # taken into the search at each look
PUBLISHED_BAND = 0.02
SEARCH_SHARE = 0.9  # of the progress bar

Progress = Callable[[float, str], None]


@dataclass
class _Best:
    """The best settings verified at every corner so far."""

    loops: Loops
    score: float


def tune(axis: CompletedAxis, seed: int, runs: int, progress: Progress | None, executor: Executor) -> Tuned:
    """Search settings for an axis; deterministic by the seed. Stopping keeps the best verified so far.

    Parameters
        axis: the completed axis; stated settings are not used
        seed: of the search
        runs: budget, simulated cycles of one plant
        progress: told the share done and the best so far; may raise Stopped
        executor: runs the candidates of a generation
    Returns the settings, what they were compared with, and the path
    Raises NotComputable where no design holds the margins at every corner
    Source: [own]
    """
    tell = progress or (lambda share, best: None)
    tell(0.0, "designing the start")
    every: list[Corner] = [{}, *(corner for corner in corners(axis.stated.tolerance) if corner)]
    bare, lag = bare_loops(axis)
    search, everywhere = Objective(axis, bare, _first_corners(every)), Objective(axis, bare, every)
    started = _designed(axis, bare, search)
    unknowns = space(axis, bare, lag)
    best = _verified(started.loops, everywhere, executor)
    path = [_step(f"designed: prototype of order {started.order}", axis, started.loops, executor)]
    try:
        best = _search(unknowns, started, search, everywhere, best, seed, runs, tell, executor)
    except Stopped:
        path.append(Step("stopped before the budget was used", math.inf, 0, True))
    tell(SEARCH_SHARE, "verifying at every corner")
    result = reference(axis, best.loops, executor)
    path.append(_as_step(f"searched: {search.runs} simulated cycles, seed {seed}", axis, result))
    textbook = reference(axis, _textbook(axis, best.loops, search), executor)
    bound, machine_bound = bounds(axis, dict(result.settled.moves[0].worst_corner))
    holds = margins_everywhere(axis, best.loops)
    return Tuned(
        result=result,
        textbook=textbook,
        path=tuple(path),
        bound=bound,
        machine_bound=machine_bound,
        seed=seed,
        runs=search.runs,
        margins_hold=holds,
        reason="" if result.settled.verdict == "pass" else "no settings were found that hold at every computed corner",
    )


def _first_corners(every: list[Corner]) -> list[Corner]:
    """A few corners to begin with: nominal, first, last and two between; the worst ones join as they show."""
    places = sorted({0, 1, len(every) // 3, 2 * len(every) // 3, len(every) - 1} & set(range(len(every))))
    return [every[place] for place in places]


def _designed(axis: CompletedAxis, bare: Loops, search: Objective) -> Designed:
    """The design that does best on the first corners: for the published band of 2 %, and for the axis's own."""
    plants = extreme_plants(axis)
    corners = [search.sampled(plant) for plant in plants]
    rates, wishes = axis.drive.rates, axis.stated.tuning
    inertia = axis.plant().total_inertia

    def design(band: float) -> Designed:
        return designed_start(bare, plants, corners, rates, inertia, band, wishes)

    window = axis.stated.window.position * (1.0 - wishes.kept_back)
    published = design(PUBLISHED_BAND)
    own = design(own_band(window, search.largest_following_error(published.loops)))
    return min(published, own, key=lambda found: search.score(found.loops)[0])


def _search(
    unknowns: Space,
    started: Designed,
    search: Objective,
    everywhere: Objective,
    best: _Best,
    seed: int,
    runs: int,
    tell: Progress,
    executor: Executor,
) -> _Best:
    """Evolve the population until the budget is used; look at all corners in between."""
    random = np.random.default_rng(seed)
    population = _first_population(unknowns, started, search, random, executor)

    def evaluate(points: list[np.ndarray], beat: list[float]) -> list[float]:
        return search.scores([unknowns.loops(point) for point in points], beat, executor)

    steps = generations(population, evaluate, random)
    while search.runs < runs:
        for _ in range(GENERATIONS):
            population = next(steps)
            tell(min(search.runs / runs, 1.0) * SEARCH_SHARE, _in_words(best))
            if search.runs >= runs:
                break
        candidate = rounded(unknowns.loops(population.points[population.best]))
        looked = _verified(candidate, everywhere, executor)
        if looked.score < best.score:
            best = looked
        search.add(everywhere.worst_corners(candidate, NEW_CORNERS, search.corners, executor))
        population.scores = search.scores(
            [unknowns.loops(point) for point in population.points], [math.inf] * POPULATION, executor
        )
    return best


def _first_population(
    unknowns: Space, started: Designed, search: Objective, random: np.random.Generator, executor: Executor
) -> Population:
    """The designed start and the random points that miss the margins least."""
    points = [random.random(len(unknowns.variables)) for _ in range(SCREENED)]
    missed = list(executor.map(lambda point: search.margins(unknowns.loops(point)), points))
    order = np.argsort(missed, kind="stable")
    chosen = [points[int(n)] for n in order[: POPULATION - 3]]
    for jerk_time in (5e-3, 20e-3, 40e-3):
        chosen.append(unknowns.point(started.loops, jerk_time))
    scores = search.scores([unknowns.loops(point) for point in chosen], [math.inf] * len(chosen), executor)
    return Population(chosen, scores)


def _verified(loops: Loops, everywhere: Objective, executor: Executor) -> _Best:
    return _Best(loops, max(everywhere.at_corners(loops, executor)))


def _in_words(best: _Best) -> str:
    if best.score >= VIOLATION_SCORE:
        return "nothing holds at every corner yet"
    return f"best so far {best.score * 1e3:.1f} ms at the worst corner"


def _textbook(axis: CompletedAxis, loops: Loops, search: Objective) -> Loops:
    """The textbook's settings with the same filters and the same moves."""
    inertia, rates = axis.plant().total_inertia, axis.drive.rates
    lag = velocity_loop_lags(axis.motor.inductance, rates, loops.current, loops.velocity.filter, loops.filters).total
    plants = [search.sampled(plant) for plant in extreme_plants(axis)]
    return textbook_settings(loops, inertia, lag, plants, axis.stated.tuning, torque_share=1.0).loops


def _step(name: str, axis: CompletedAxis, loops: Loops, executor: Executor) -> Step:
    settled = check(axis, loops, None, executor)
    worst = sum(move.worst.time_to_window for move in settled.moves)
    failing = max(move.failing_corners for move in settled.moves)
    return Step(name, worst, failing, margins_everywhere(axis, loops))


def _as_step(name: str, axis: CompletedAxis, found: Reference) -> Step:
    failing = max(move.failing_corners for move in found.settled.moves)
    return Step(name, found.worst_time, failing, margins_everywhere(axis, found.loops))
