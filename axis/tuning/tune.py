"""Tuning: designed start, search on the simulation at the worst corner, verification at every corner."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np

from axis.completion import CompletedAxis
from axis.description.corners import SHARES, corners
from axis.description.settings import Loops
from axis.errors import NotComputable, Stopped
from axis.loops.lag import velocity_loop_lags
from axis.loops.start import Designed, designed_start
from axis.loops.textbook import textbook_settings
from axis.settling.check import check
from axis.simulation.ahead import compile_ahead
from axis.sizing.bound import bounds
from axis.tuning.evolution import Population, generations
from axis.tuning.objective import VIOLATION_SCORE, Corner, Objective, extreme_plants, margin_corners
from axis.tuning.reference import judged, margins_everywhere
from axis.tuning.result import Reference, Step, Tuned
from axis.tuning.start import WIDEST_BAND, bare_loops, own_band
from axis.tuning.variables import Space, rounded, space

POPULATION = 20
SCREENED = 640  # random points judged on their margins alone
GENERATIONS = 8  # between two looks at all corners
NEW_CORNERS = 3  # taken into the search at each look
JERK_TIMES = (5e-3, 20e-3, 40e-3)  # [s] with which the designed start joins the search
VERIFIED = 5  # looks that are tried in full
NOTHING_FOUND = "no settings were found that hold at every computed corner"
SETTLING_TIMES = 2.0  # asked settling times that the search watches of a rest; verification watches all of it
SEARCH_SHARE = 0.9  # of the progress bar

Progress = Callable[[float, str], None]


@dataclass(frozen=True)
class _Look:
    """Settings as they would be stored, looked at on every corner."""

    loops: Loops
    score: float  # at the worst corner
    corners: tuple[Corner, ...]  # the worst ones, first the worst


def tune(axis: CompletedAxis, seed: int, runs: int, progress: Progress | None, executor: Executor) -> Tuned:
    """Search settings for an axis; deterministic by the seed. Stopping keeps the best so far.

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
    tell(0.0, "designing the start; the first time on a machine the simulation is compiled")
    compiled = compile_ahead()
    every: list[Corner] = [{}, *corners(axis.stated.tolerance)]
    bare, lag = bare_loops(axis)
    brief = SETTLING_TIMES * axis.settle_within + axis.stated.window.time
    search = Objective(axis, bare, _first_corners(every), extreme_plants(axis), longest_dwell=brief)
    everywhere = Objective(axis, bare, every, [plant for _, plant in margin_corners(axis, SHARES)])
    started = _designed(axis, bare, search, compiled)
    designed = rounded(started.loops, axis.stated.rotary)
    path = [_step(f"designed: prototype of order {started.order}", axis, designed, executor)]
    looks = [_look(designed, everywhere, executor)]
    stopped = ""
    starts = [designed, _textbook(axis, designed, search)]
    try:
        for look in _search(space(axis, bare, lag), starts, search, everywhere, seed, runs, tell, executor):
            looks.append(look)
        tell(SEARCH_SHARE, "verifying at every corner")
    except Stopped:
        stopped = ", stopped"
    best = min(looks, key=lambda look: look.score)
    looks.append(_look(rounded(_textbook(axis, best.loops, search), axis.stated.rotary), everywhere, executor))
    result = _verified(axis, looks, executor)
    holds = margins_everywhere(axis, result.loops)
    path.append(_as_step(f"searched{stopped}: {search.runs} simulated cycles, seed {seed}", axis, result))
    textbook = _textbook(axis, result.loops, search)
    bound, machine_bound = bounds(axis, [move.worst_corner for move in result.settled.moves])
    return Tuned(
        result=result,
        textbook=judged(axis, textbook, check(axis, textbook, None, executor)),
        path=tuple(path),
        bound=bound,
        machine_bound=machine_bound,
        seed=seed,
        runs=search.runs,
        margins_hold=holds,
        searched=result.loops != designed,
        reason="" if holds and result.settled.verdict != "fail" else NOTHING_FOUND,
    )


def _first_corners(every: list[Corner]) -> list[Corner]:
    """A few corners to begin with: nominal, first, last and two between; the worst ones join as they show."""
    places = sorted({0, 1, len(every) // 3, 2 * len(every) // 3, len(every) - 1} & set(range(len(every))))
    return [every[place] for place in places]


def _designed(axis: CompletedAxis, bare: Loops, search: Objective, compiled: Callable[[], None]) -> Designed:
    """The design that does best on the first corners: for the published band of 2 %, and for the axis's own.

    `compiled` waits for the simulation, which the first design does without.
    """
    plants = extreme_plants(axis)
    corners = [search.sampled(plant) for plant in plants]
    rates, wishes = axis.drive.rates, axis.stated.tuning
    inertia = axis.plant().total_inertia

    def design(band: float) -> Designed:
        return designed_start(bare, plants, corners, rates, inertia, band, wishes)

    window = axis.stated.window.position * (1.0 - wishes.kept_back)
    published = design(WIDEST_BAND)
    compiled()
    band = own_band(window, search.largest_following_error(published.loops))
    if band == WIDEST_BAND:
        return published
    try:
        own = design(band)
    except NotComputable:
        return published
    return min(published, own, key=lambda found: search.score(found.loops)[0])


def _search(
    unknowns: Space,
    starts: list[Loops],
    search: Objective,
    everywhere: Objective,
    seed: int,
    runs: int,
    tell: Progress,
    executor: Executor,
) -> Iterator[_Look]:
    """Evolve a population until the budget is used; in between look at all corners and take in the worst."""
    random = np.random.default_rng(seed)
    population = _first_population(unknowns, starts, search, random, executor)

    def evaluate(points: list[np.ndarray], beat: list[float]) -> list[float]:
        return search.scores([unknowns.loops(point) for point in points], beat, executor)

    steps = generations(population, evaluate, random)
    last: Loops | None = None
    while search.runs < runs:
        for _ in range(GENERATIONS):
            population = next(steps)
            share = min(search.runs / runs, 1.0) * SEARCH_SHARE
            tell(share, _in_words(population.scores[population.best], len(search.corners)))
            if search.runs >= runs:
                break
        candidate = rounded(unknowns.loops(population.points[population.best]), unknowns.axis.stated.rotary)
        if candidate == last:
            continue
        last = candidate
        look = _look(candidate, everywhere, executor)
        yield look
        known = search.corners
        fresh = [corner for corner in look.corners if corner not in known][:NEW_CORNERS]
        members = [unknowns.loops(point) for point in population.points]
        population.scores = search.taken_in(fresh, members, population.scores, executor)


def _first_population(
    unknowns: Space, starts: list[Loops], search: Objective, random: np.random.Generator, executor: Executor
) -> Population:
    """Designed and textbook settings, each with a few jerks, and the random points that miss the margins least."""
    points = [random.random(len(unknowns.variables)) for _ in range(SCREENED)]
    missed = list(executor.map(lambda point: search.margins(unknowns.loops(point)), points))
    order = np.argsort(missed, kind="stable")
    chosen = [unknowns.point(loops, jerk_time) for loops in starts for jerk_time in JERK_TIMES]
    chosen += [points[int(n)] for n in order[: POPULATION - len(chosen)]]
    scores = search.scores([unknowns.loops(point) for point in chosen], [math.inf] * len(chosen), executor)
    return Population(chosen, scores)


def _look(loops: Loops, everywhere: Objective, executor: Executor) -> _Look:
    scores = everywhere.at_corners(loops, executor)
    order = sorted(range(len(scores)), key=lambda n: -scores[n])
    return _Look(loops, max(scores), tuple(everywhere.corners[n] for n in order[: 8 * NEW_CORNERS]))


def _verified(axis: CompletedAxis, looks: list[_Look], executor: Executor) -> Reference:
    """The best look that passes in full, its cycle repeated until it repeats itself; else the best look."""
    ranked = sorted(looks, key=lambda look: look.score)
    tried = []
    for look in ranked[:VERIFIED]:
        settled = check(axis, look.loops, None, executor)
        if settled.verdict != "fail":
            return judged(axis, look.loops, settled)
        tried.append(settled)
    return judged(axis, ranked[0].loops, tried[0])


def _in_words(score: float, corners: int) -> str:
    if score >= VIOLATION_SCORE:
        return f"nothing holds yet at the worst of {corners} corners"
    return f"best so far {score * 1e3:.1f} ms to the window at the worst of {corners} corners"


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
