"""Differential evolution on the unit cube: half current-to-best, half random; deterministic by its seed.

Time to window is flat in most directions, with cliffs between: gradients are useless. Source: [storn1997].
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]
Evaluate = Callable[[list[Array], list[float]], list[float]]  # points and the scores to beat → scores


@dataclass
class Population:
    """Points of the unit cube with their scores, smaller is better."""

    points: list[Array]
    scores: list[float]

    @property
    def best(self) -> int:
        return int(np.argmin(self.scores))


def trials(population: Population, random: np.random.Generator) -> list[Array]:
    """One trial point for each member."""
    size, dimensions = len(population.points), len(population.points[0])
    order = np.argsort(population.scores, kind="stable")
    made = []
    for parent in population.points:
        scale = random.uniform(0.3, 0.9)
        first, second, third = (population.points[int(i)] for i in random.choice(size, 3, replace=False))
        if random.random() < 0.5:
            leader = population.points[int(order[random.integers(max(size // 6, 2))])]
            mutant = parent + scale * (leader - parent) + scale * (first - second)
        else:
            mutant = third + scale * (first - second)
        crossing = 0.9 if random.random() < 0.5 else 0.3
        taken = random.random(dimensions) < crossing
        taken[random.integers(dimensions)] = True
        trial = np.where(taken, mutant, parent)
        # Reflect at the walls once, then clip: bounds stay reachable.
        trial = np.where(trial < 0.0, -trial, trial)
        trial = np.where(trial > 1.0, 2.0 - trial, trial)
        made.append(np.clip(trial, 0.0, 1.0))
    return made


def generations(population: Population, evaluate: Evaluate, random: np.random.Generator) -> Iterator[Population]:
    """Improve the population for ever, one generation at a time; the caller stops."""
    while True:
        candidates = trials(population, random)
        scores = evaluate(candidates, population.scores)
        for n, (candidate, score) in enumerate(zip(candidates, scores, strict=True)):
            if score <= population.scores[n]:
                population.points[n], population.scores[n] = candidate, score
        yield population
