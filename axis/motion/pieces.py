"""A move as pieces of constant jerk: evaluated and integrated exactly."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from axis.errors import NotComputable

ROUNDING = 1e-12  # relative; a limit met exactly is not exceeded

Array = npt.NDArray[np.float64]


def evaluate_piece(
    time: float, position: float, speed: float, acceleration: float, jerk: float
) -> tuple[float, float, float]:
    """Position, speed and acceleration after some time of constant jerk.

    Parameters
        time [s]: since the start of the piece
        position [m or rad]: at the start
        speed [m/s or rad/s]: at the start
        acceleration [m/s² or rad/s²]: at the start
        jerk [m/s³ or rad/s³]: constant
    Returns [m or rad], [m/s or rad/s], [m/s² or rad/s²]
    p + v·t + a·t²/2 + j·t³/6, v + a·t + j·t²/2, a + j·t
    Source: [own]
    """
    return (
        position + time * (speed + time * (acceleration / 2.0 + time * jerk / 6.0)),
        speed + time * (acceleration + time * jerk / 2.0),
        acceleration + time * jerk,
    )


@dataclass(frozen=True, eq=False)
class Profile:
    """A motion from rest to rest in load units; at rest before its start and after its end."""

    pieces: Array  # (n, 5), n > 0: duration [s], then at its start p [m], v [m/s], a [m/s²]; jerk [m/s³]

    @property
    def duration(self) -> float:
        """[s]"""
        return float(self.pieces[:, 0].sum())

    @property
    def start(self) -> float:
        """[m] where it starts."""
        return float(self.pieces[0, 1])

    @property
    def end(self) -> float:
        """[m] where it ends."""
        t, p, v, a, j = (float(number) for number in self.pieces[-1])
        return evaluate_piece(t, p, v, a, j)[0]

    @property
    def peak_speed(self) -> float:
        """[m/s] largest |v|, exact: at a piece's start or where its acceleration crosses zero."""
        return float(np.abs(self._speeds()).max())

    @property
    def peak_acceleration(self) -> float:
        """[m/s²] largest |a|."""
        t, _, _, a, j = self.pieces.T
        return float(max(np.abs(a).max(), np.abs(a + j * t).max()))

    @property
    def peak_jerk(self) -> float:
        """[m/s³] largest |jerk| of the pieces; steps of acceleration between them are not seen."""
        return float(np.abs(self.pieces[:, 4]).max())

    @property
    def mean_speed(self) -> float:
        """[m/s] mean of |v| over the duration; zero for a profile without duration."""
        if self.duration == 0.0:
            return 0.0
        return float(np.abs(self._turning_distances()).sum()) / self.duration

    @property
    def squared_speed(self) -> float:
        """[m²/s] ∫v² dt over the duration."""
        t, _, v, a, j = self.pieces.T
        powers = np.stack([v * v, v * a, (a * a + v * j) / 3.0, a * j / 4.0, j * j / 20.0])
        return float(sum(np.sum(one * t ** (n + 1)) for n, one in enumerate(powers)))

    @property
    def squared_acceleration(self) -> float:
        """[m²/s³] ∫a² dt over the duration."""
        t, _, _, a, j = self.pieces.T
        return float(np.sum(t * (a * a + t * (a * j + t * j * j / 3.0))))

    def evaluate(self, time: Array | float) -> tuple[Array, Array, Array, Array]:
        """Position, speed, acceleration and jerk at any times [s]; where two pieces meet, the later one's."""
        times = np.asarray(time, dtype=np.float64)
        ends = np.cumsum(self.pieces[:, 0])
        inside = np.clip(times, 0.0, ends[-1])
        at = np.minimum(np.searchsorted(ends, inside, side="right"), len(ends) - 1)
        duration, p, v, a, j = np.moveaxis(self.pieces[at], -1, 0)
        t = inside - (ends[at] - duration)
        moving = (times >= 0.0) & (times < ends[-1])
        return (
            p + t * (v + t * (a / 2.0 + t * j / 6.0)),
            np.where(moving, v + t * (a + t * j / 2.0), 0.0),
            np.where(moving, a + t * j, 0.0),
            np.where(moving, j, 0.0),
        )

    def _speeds(self) -> Array:
        """Speeds at the starts, ends and turning points of all pieces."""
        t, _, v, a, j = self.pieces.T
        with np.errstate(divide="ignore", invalid="ignore"):
            turn = np.where(j != 0.0, -a / j, 0.0)
        turn = np.clip(turn, 0.0, t)
        return np.concatenate([v + s * (a + s * j / 2.0) for s in (0.0 * t, turn, t)])

    def _turning_distances(self) -> Array:
        """Distances between the instants at which the speed may change its sign."""
        distances = []
        for t, p, v, a, j in self.pieces.tolist():
            times = [0.0, *(s for s in speed_zeros(v, a, j) if 0.0 < s < t), t]
            positions = [evaluate_piece(s, p, v, a, j)[0] for s in times]
            distances += list(np.diff(positions))
        return np.asarray(distances, dtype=np.float64)


def speed_zeros(speed: float, acceleration: float, jerk: float) -> list[float]:
    """Times at which the speed of a piece is zero, ascending; none where it never is.

    Parameters
        speed [m/s or rad/s]: at the start of the piece
        acceleration [m/s² or rad/s²]: at the start of the piece
        jerk [m/s³ or rad/s³]: constant
    Returns [s]
    roots of v + a·t + j·t²/2
    Source: [own]
    """
    if jerk == 0.0:
        return [-speed / acceleration] if acceleration != 0.0 else []
    inside = acceleration**2 - 2.0 * jerk * speed
    if inside < 0.0:
        return []
    q = -(acceleration + math.copysign(math.sqrt(inside), acceleration))
    return sorted([q / jerk, 2.0 * speed / q] if q != 0.0 else [0.0])


def from_rest(start: float, phases: Iterable[tuple[float, float, float]]) -> Profile:
    """Join phases to a profile that starts at rest.

    Parameters
        start [m or rad]: position at the start
        phases [s; m/s² or rad/s²; m/s³ or rad/s³]: duration, acceleration at its start, jerk of each
    Returns the profile; phases without duration are left out
    Source: [own]
    """
    rows, position, speed = [], start, 0.0
    for duration, acceleration, jerk in phases:
        if duration > 0.0:
            rows.append((duration, position, speed, acceleration, jerk))
            position, speed, _ = evaluate_piece(duration, position, speed, acceleration, jerk)
    return Profile(np.array(rows or [(0.0, start, 0.0, 0.0, 0.0)], dtype=np.float64))


def stretched(profile: Profile, factor: float) -> Profile:
    """The same path in another time: everything slower by one factor.

    Parameters
        profile: to stretch
        factor [1]: new duration over old one
    Returns the profile
    t → f·t, v → v/f, a → a/f², j → j/f³
    Source: [own]
    """
    return Profile(profile.pieces * np.array([factor, 1.0, 1.0 / factor, 1.0 / factor**2, 1.0 / factor**3]))


def in_time(fastest: Profile, duration: float) -> Profile:
    """A time-optimal move stretched to a longer time.

    Parameters
        fastest: under its limits, starting at position zero
        duration [s]: asked for
    Returns the profile; raises NotComputable where the time is too short
    f = T/T_fastest
    Source: [own]
    """
    if fastest.duration == 0.0:
        return from_rest(0.0, [(duration, 0.0, 0.0)])
    if duration < fastest.duration * (1.0 - ROUNDING):
        raise NotComputable(
            f"the move takes at least {fastest.duration:.6g} s under its limits; {duration:.6g} s is too short"
        )
    return stretched(fastest, duration / fastest.duration)


def within_limits(
    profile: Profile,
    speed: float | None = None,
    acceleration: float | None = None,
    deceleration: float | None = None,
    jerk: float | None = None,
) -> Profile:
    """A move given by its time, if it keeps the limits that are stated beside it.

    Parameters
        profile: with equal ramps
        speed [m/s or rad/s]: limit, if any
        acceleration [m/s² or rad/s²]: limit, if any
        deceleration [m/s² or rad/s²]: limit, if any
        jerk [m/s³ or rad/s³]: limit, if any
    Returns the profile; raises NotComputable where it exceeds a limit
    Source: [own]
    """
    for name, needed, limit in (
        ("speed", profile.peak_speed, speed),
        ("acceleration", profile.peak_acceleration, acceleration),
        ("deceleration", profile.peak_acceleration, deceleration),
        ("jerk", profile.peak_jerk, jerk),
    ):
        if limit is not None and needed > limit * (1.0 + ROUNDING):
            raise NotComputable(f"the given time needs a {name} of {needed:.6g}, above its limit of {limit:.6g}")
    return profile
