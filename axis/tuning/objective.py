"""What a candidate is worth: margins first, then the verdict's conditions, then the worst corner's time to window."""

from __future__ import annotations

import itertools
import math
from collections.abc import Mapping, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from axis.completion import CompletedAxis, ShaftPlant, at_corner
from axis.description.settings import Loops
from axis.loops.margins import margin_violation
from axis.loops.sampled import SampledPlant, sample_plant
from axis.settling.scenarios import commanded
from axis.simulation.cycle import simulate_corners
from axis.simulation.layout import (
    CURRENT_SATURATED,
    DURATION,
    FIGURES_SIZE,
    FOLLOWING_ERROR,
    LIMITS_SIZE,
    OVERSHOOT,
    PEAK_SPEED,
    PLANT_SIZE,
    REST_ERROR,
    SIGNAL,
    SIGNAL_EARLY,
    TIME_TO_WINDOW,
    TRIPPED,
    VOLTAGE_SATURATED,
)
from axis.simulation.scenario import cycle_arrays, frame_vector, gains_vector, limits_vector, plants_matrix

Array = npt.NDArray[np.float64]
Corner = Mapping[str, float]

UNSTABLE_SCORE = 1e9  # margins missed; no simulation was spent
VIOLATION_SCORE = 1e4  # a condition of the verdict missed
CYCLES = 1  # the search looks at the first cycle; verification repeats it until it repeats itself


@dataclass(frozen=True)
class Conditions:
    """The verdict's conditions as the search sees them, at the motor shaft."""

    settle_within: float  # [s]
    following_error: float  # [rad] infinite: not asked
    overshoot: float  # [rad]
    window: float  # [rad] less the kept-back share
    max_speed: float  # [rad/s]


class Objective:
    """Scores of candidates on a growing set of corners; smaller is better."""

    def __init__(
        self,
        axis: CompletedAxis,
        start: Loops,
        corners: Sequence[Corner],
        plants: Sequence[ShaftPlant],
        longest_dwell: float = math.inf,
    ) -> None:
        self.axis = axis
        self.runs = 0
        stated = axis.stated
        self._scale = abs(axis.ratio)
        window = stated.window.position * (1.0 - stated.tuning.kept_back)
        error = stated.window.following_error
        overshoot = stated.window.max_overshoot
        self.conditions = Conditions(
            settle_within=axis.settle_within,
            following_error=math.inf if error is None else error * self._scale,
            overshoot=min(window, math.inf if overshoot is None else overshoot) * self._scale,
            window=window * self._scale,
            max_speed=axis.motor.max_speed or math.inf,
        )
        self._frame = frame_vector(axis.drive.rates, axis.motor.torque_constant, axis.ratio, window, stated.window.time)
        self._current = start.current
        self._inertia = axis.plant().total_inertia
        self._longest_dwell = longest_dwell  # [s] observed of any dwell
        self._plants = np.zeros((0, len(axis.moves), PLANT_SIZE))
        self._limits = np.zeros((0, LIMITS_SIZE))
        self.corners: list[Corner] = []
        self.margin_plants = [self.sampled(plant) for plant in plants]
        self.add(corners)

    def add(self, corners: Sequence[Corner]) -> None:
        """Judge candidates at these corners too, first of all."""
        fresh = [corner for corner in corners if corner not in self.corners]
        for corner in fresh:
            there = at_corner(self.axis, corner)
            plants = plants_matrix([there.move_plant(move) for move in there.moves])
            self._plants = np.concatenate([plants[None], self._plants])
            self._limits = np.concatenate([limits_vector(there.limits())[None], self._limits])
            self.corners.insert(0, corner)

    def sampled(self, plant: ShaftPlant) -> SampledPlant:
        """One plant as the margins see it."""
        return sample_plant(plant, self.axis.drive.rates, self._current, self.axis.motor.torque_constant)

    def margins(self, loops: Loops, first_is_enough: bool = False) -> float:
        """Largest violation of the margins over the plants, 0 where all hold; or the first that is found."""
        wishes = self.axis.stated.tuning
        worst = 0.0
        for plant in self.margin_plants:
            worst = max(worst, margin_violation(plant, loops, wishes))
            if first_is_enough and worst > 0.0:
                break
        return worst

    def score(self, loops: Loops, beat: float = math.inf) -> tuple[float, int]:
        """Score of one candidate and the runs it cost; stops early once it is worse than `beat`."""
        violation = self.margins(loops, first_is_enough=beat < UNSTABLE_SCORE)
        if violation > 0.0:
            return UNSTABLE_SCORE * (1.0 + violation), 0
        score, done = 0.0, 0
        while done < len(self.corners):
            # The corner that was worst last stands first and is asked alone: it ends most candidates.
            until = 1 if done == 0 else len(self.corners)
            figures, durations = self._figures(loops, done, until)
            score = max(score, *(corner_score(at, durations, self.conditions) for at in figures))
            done = until
            if score > beat:
                break
        return score, done

    def at_corners(self, loops: Loops, executor: Executor) -> list[float]:
        """Score at every corner, in the order of `corners`; margins that fail count at each."""
        violation = self.margins(loops)
        if violation > 0.0:
            return [UNSTABLE_SCORE * (1.0 + violation)] * len(self.corners)
        size = max(len(self.corners) // 8, 1)
        parts = [(n, min(n + size, len(self.corners))) for n in range(0, len(self.corners), size)]
        results = executor.map(lambda part: self._figures(loops, *part), parts)
        return [corner_score(at, durations, self.conditions) for found, durations in results for at in found]

    def largest_following_error(self, loops: Loops) -> float:
        """[m] Largest following error on the corners, infinite where the loop diverges."""
        figures, _ = self._figures(loops, 0, len(self.corners))
        return float(figures[:, :, FOLLOWING_ERROR].max()) / self._scale

    def _figures(self, loops: Loops, first: int, last: int) -> tuple[Array, Array]:
        """What the kernel saw at corners `first` to `last`, and the durations of the moves."""
        gains = gains_vector(loops, self.axis.drive.rates, self._inertia)
        cycle = cycle_arrays(commanded(self.axis, loops, self._longest_dwell), self.axis.drive.rates, self.axis.ratio)
        figures = np.zeros((last - first, len(self.axis.moves), FIGURES_SIZE))
        cycles = np.zeros(last - first, dtype=np.int64)
        simulate_corners(
            self._plants[first:last], self._limits[first:last], self._frame, gains,
            cycle.pieces, cycle.first_piece, cycle.moves, CYCLES, figures, cycles,
        )  # fmt: skip
        return figures, cycle.moves[:, DURATION]

    def taken_in(
        self, corners: Sequence[Corner], candidates: Sequence[Loops], scores: Sequence[float], executor: Executor
    ) -> list[float]:
        """Take corners in; the scores with them. A score is that of the worst corner, so only the new ones are run."""
        before = len(self.corners)
        self.add(corners)
        new = len(self.corners) - before

        def raised(loops: Loops, score: float) -> float:
            if new == 0 or score >= UNSTABLE_SCORE:
                return score
            figures, durations = self._figures(loops, 0, new)
            return max(score, *(corner_score(at, durations, self.conditions) for at in figures))

        results = list(executor.map(raised, candidates, scores))
        self.runs += new * sum(score < UNSTABLE_SCORE for score in scores)
        return results

    def scores(self, candidates: Sequence[Loops], beat: Sequence[float], executor: Executor) -> list[float]:
        """Scores of many candidates, in their order; counts the runs."""
        results = list(executor.map(self.score, candidates, beat))
        self.runs += sum(runs for _, runs in results)
        return [score for score, _ in results]


def corner_score(figures: Array, durations: Array, wanted: Conditions) -> float:
    """Sum of the times to window [s] at one corner, or above `VIOLATION_SCORE` by how much conditions are missed."""
    violation = total = 0.0
    for at, duration in zip(figures, durations, strict=True):
        violation += move_violation(at, float(duration), wanted)
        total += float(at[TIME_TO_WINDOW])
    return total if violation == 0.0 else VIOLATION_SCORE * (1.0 + min(violation, 1e3))


def move_violation(at: Array, duration: float, wanted: Conditions) -> float:
    """How far one move misses the verdict's conditions; 0 where it meets all of them.

    `duration` [s] to the commanded end.
    Returns [1], each condition as a share of what is wanted
    Source: [own]
    """
    if not math.isfinite(at[FOLLOWING_ERROR]):
        return 1e3
    missed = 0.0
    if math.isinf(at[TIME_TO_WINDOW]):
        missed += 3.0 + min(abs(at[REST_ERROR]) / wanted.window, 50.0)
    else:
        missed += max((at[TIME_TO_WINDOW] - duration) / wanted.settle_within - 1.0, 0.0)
        missed += 1.0 if math.isinf(at[SIGNAL]) else max(at[SIGNAL_EARLY], 0.0) / wanted.settle_within
    missed += max(at[FOLLOWING_ERROR] / wanted.following_error - 1.0, 0.0)
    missed += max(at[OVERSHOOT] / wanted.overshoot - 1.0, 0.0) if wanted.overshoot > 0.0 else float(at[OVERSHOOT] > 0)
    missed += max(at[PEAK_SPEED] / wanted.max_speed - 1.0, 0.0)
    clipped = float(at[CURRENT_SATURATED] + at[VOLTAGE_SATURATED])
    missed += 0.1 + clipped / duration if clipped > 0.0 else 0.0
    return float(missed + at[TRIPPED])


def extreme_plants(axis: CompletedAxis) -> list[ShaftPlant]:
    """Nominal, and the ends of inertia, stiffness and torque constant: light and empty, heavy and fully laden."""
    light, heavy = min(move.payload for move in axis.moves), axis.heaviest_payload
    found = [axis.plant(heavy)]
    for corner in _margin_shares(axis, (-1.0, 1.0)):
        share = corner.get("load_mass", 0.0)
        for payload in {light, heavy} if share == 0.0 else {heavy if share > 0.0 else light}:
            found.append(at_corner(axis, corner).plant(payload * (1.0 + share)))
    return found


def margin_corners(axis: CompletedAxis, steps: Sequence[float]) -> list[tuple[Corner, ShaftPlant]]:
    """Every plant whose margins differ: friction and bus do not count in the friction-free loop, each payload does.

    Parameters
        axis: nominal
        steps [1]: shares of their tolerance that load mass and stiffness take
    Returns each corner with its plant
    Source: [own]
    """
    payloads = sorted({move.payload for move in axis.moves})
    return [
        (corner, at_corner(axis, corner).plant(payload * (1.0 + corner.get("load_mass", 0.0))))
        for corner in ({}, *_margin_shares(axis, steps))
        for payload in payloads
    ]


def _margin_shares(axis: CompletedAxis, steps: Sequence[float]) -> list[dict[str, float]]:
    """Combinations of the tolerances that move the margins; load mass and stiffness take the given steps."""
    tolerance = axis.stated.tolerance
    names = [name for name in ("load_mass", "stiffness", "torque_constant") if getattr(tolerance, name) > 0.0]
    grids = [(-1.0, 1.0) if name == "torque_constant" else steps for name in names]
    return [
        {name: step * float(getattr(tolerance, name)) for name, step in zip(names, row, strict=True)}
        for row in itertools.product(*grids)
        if names
    ]
