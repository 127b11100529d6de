"""A second simulation, for the tests: plain Python, scipy's solver between samples, every stop and start an event.

Written from the execution order of `docs/model.md`; shares no line with the kernel. The load has its own angle here
(the kernel keeps the twist instead), filters and set-points are computed from their own formulas.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np
from scipy.integrate import solve_ivp

from axis.simulation.scenario import CommandedMove, Scenario


@dataclass
class Record:
    """At every current sample, shaft units: time, motor angle and speed, load angle and speed, current, voltage."""

    rows: list[tuple[float, ...]] = field(default_factory=list)
    stops: int = 0
    starts: int = 0

    def array(self) -> np.ndarray:
        return np.array(self.rows)


def setpoint(move: CommandedMove, t: float) -> tuple[float, float, float]:
    for duration, p, v, a, j in move.pieces:
        if t < duration:
            return p + v * t + a * t**2 / 2 + j * t**3 / 6, v + a * t + j * t**2 / 2, a + j * t
        t -= duration
    return move.distance, 0.0, 0.0


class Filter:
    """A torque filter by its difference equation in direct form I."""

    def __init__(self, setting, period: float, at: float) -> None:
        w = setting.frequency
        if setting.kind == "lowpass":
            pole = math.exp(-w * period)
            self.b, self.a = (1.0 - pole, 0.0, 0.0), (-pole, 0.0)
        else:
            k = w / math.tan(w * period / 2.0)  # s = k·(z − 1)/(z + 1), exact at the centre
            width, depth = setting.width, setting.depth
            low = k * k + width * k + w * w
            self.b = (
                (k * k + depth * width * k + w * w) / low,
                2.0 * (w * w - k * k) / low,
                (k * k - depth * width * k + w * w) / low,
            )
            self.a = (2.0 * (w * w - k * k) / low, (k * k - width * k + w * w) / low)
        self.u, self.y = [at, at], [at, at]

    def __call__(self, u: float) -> float:
        y = (
            self.b[0] * u
            + self.b[1] * self.u[0]
            + self.b[2] * self.u[1]
            - self.a[0] * self.y[0]
            - self.a[1] * self.y[1]
        )
        self.u, self.y = [u, self.u[0]], [y, self.y[0]]
        return y


class Shaft:
    """The axis between samples."""

    def __init__(self, plant, method: str = "DOP853", rtol: float = 1e-12, max_step: float = 3.2e-5) -> None:
        self.plant, self.method, self.rtol, self.max_step = plant, method, rtol, max_step
        self.rigid = math.isinf(plant.stiffness)
        self.state = np.zeros(5)  # motor angle, motor speed, load angle, load speed, current
        self.motor, self.load = 0, 0  # senses of motion, 0 at rest
        self.stops = self.starts = 0

    def friction(self, speed: float) -> float:
        p = self.plant
        size = p.coulomb
        if p.stribeck_speed > 0.0:
            size += (p.breakaway - p.coulomb) * math.exp(-((speed / p.stribeck_speed) ** 2))
        return self.load * size

    def spring(self, s) -> float:
        return self.plant.stiffness * (s[0] - s[2]) + self.plant.damping * (s[1] - s[3])

    def on_load(self, s) -> float:
        drive = self.plant.torque_constant * s[4] if self.rigid else self.spring(s)
        return drive - self.plant.load_torque - self.plant.viscous * s[3]

    def on_motor(self, s) -> float:
        return self.plant.torque_constant * s[4] - self.spring(s)

    def rates(self, s, voltage: float) -> list[float]:
        p = self.plant
        current = (voltage - p.resistance * s[4] - p.voltage_constant * s[1]) / p.inductance
        if self.rigid:
            held = self.load == 0 and self.holding > 0.0
            drag = self.load * p.motor_coulomb
            alpha = 0.0 if held else (self.on_load(s) - self.friction(s[3]) - drag) / (p.motor_inertia + p.load_inertia)
            return [s[1], alpha, s[3], alpha, current]
        moved = self.motor == 0 and p.motor_coulomb > 0.0
        motor = 0.0 if moved else (self.on_motor(s) - self.motor * p.motor_coulomb) / p.motor_inertia
        held = self.load == 0 and p.breakaway > 0.0
        load = 0.0 if held else (self.on_load(s) - self.friction(s[3])) / p.load_inertia
        return [s[1], motor, s[3], load, current]

    @property
    def holding(self) -> float:
        return self.plant.breakaway + (self.plant.motor_coulomb if self.rigid else 0.0)

    def events(self):
        found = []
        if self.holding > 0.0:
            if self.load == 0:
                found.append(("load", lambda t, s: abs(self.on_load(s)) - self.holding, 1.0))
            else:
                found.append(("load", lambda t, s: self.load * s[3], -1.0))
        if self.plant.motor_coulomb > 0.0 and not self.rigid:
            if self.motor == 0:
                found.append(("motor", lambda t, s: abs(self.on_motor(s)) - self.plant.motor_coulomb, 1.0))
            else:
                found.append(("motor", lambda t, s: self.motor * s[1], -1.0))
        return found

    def settle_senses(self) -> None:
        """A side at zero speed moves where the torque on it exceeds what holds it."""
        s = self.state
        if self.holding > 0.0 and self.load == 0 and abs(self.on_load(s)) > self.holding * (1.0 + 1e-12):
            self.load = int(math.copysign(1, self.on_load(s)))
            self.starts += 1
        drag = self.plant.motor_coulomb
        if not self.rigid and drag > 0.0 and self.motor == 0 and abs(self.on_motor(s)) > drag * (1.0 + 1e-12):
            self.motor = int(math.copysign(1, self.on_motor(s)))
            self.starts += 1

    def advance(self, voltage: float, duration: float) -> None:
        t = 0.0
        for _ in range(200):
            if duration - t <= 1e-15:
                return
            self.settle_senses()
            named = self.events()
            calls = []
            for _, function, direction in named:
                call = lambda t, s, f=function: f(t, s)  # noqa: E731
                call.terminal, call.direction = True, direction
                calls.append(call)
            solved = solve_ivp(
                lambda t, s: self.rates(s, voltage),
                (t, duration),
                self.state,
                method=self.method,
                rtol=self.rtol,
                atol=1e-13 if self.rtol < 1e-9 else self.rtol * 1e-3,
                max_step=self.max_step,
                events=calls or None,
            )
            self.state = solved.y[:, -1].copy()
            t = float(solved.t[-1])
            if solved.status != 1:
                return
            for (side, _, _), times in zip(named, solved.t_events, strict=True):
                if len(times):
                    self.event(side)

    def event(self, side: str) -> None:
        index, torque, holding = (3, self.on_load, self.holding)
        if side == "motor":
            index, torque, holding = (1, self.on_motor, self.plant.motor_coulomb)
        if getattr(self, side) == 0:
            setattr(self, side, int(math.copysign(1, torque(self.state))))
            self.starts += 1
            return
        self.state[index] = 0.0
        if self.rigid:
            self.state[1] = 0.0
        pushed = torque(self.state)
        setattr(self, side, 0 if abs(pushed) <= holding else int(math.copysign(1, pushed)))
        self.stops += 1


def simulate(scenario: Scenario, cycles: int = 1, **solver) -> Record:
    """The whole drive on the whole cycle; the record of the last cycle."""
    rates, limits, loops, ratio = scenario.rates, scenario.limits, scenario.loops, scenario.ratio
    tc, tv, tp = rates.current_period, rates.velocity_period, rates.position_period
    kt = scenario.nominal_torque_constant
    shaft = Shaft(scenario.plants[-1], **solver)
    plant = shaft.plant
    windup = 0.0 if shaft.rigid else plant.load_torque / plant.stiffness
    holding = plant.load_torque / plant.torque_constant
    shaft.state[2], shaft.state[4] = -windup, holding
    x_torque, x_voltage, voltage = holding * kt, plant.resistance * holding, plant.resistance * holding
    filters = [Filter(setting, tv, x_torque) for setting in loops.filters]
    share = 1.0 if loops.velocity.filter == 0.0 else 1.0 - math.exp(-tv / loops.velocity.filter)
    last_angle = filtered = 0.0
    command, full, level = holding, False, 0.0
    full_at = (limits.drive_peak_current**2 - limits.continuous_current**2) * limits.peak_time
    record = Record()
    base = 0.0
    for _ in range(cycles):
        record = Record()
        start = base
        for plant, move in zip(scenario.plants, scenario.moves, strict=True):
            shaft.plant = plant
            periods = max(1, math.ceil((move.duration + move.dwell) / tp - 1e-9))
            for k in range(periods * rates.position_every * rates.velocity_every):
                t = k * tc
                angle = shaft.state[0]
                if math.isfinite(limits.encoder_counts):
                    q = 2.0 * math.pi / limits.encoder_counts
                    angle = q * math.floor(angle / q + 0.5)
                current = shaft.state[4]
                if k % (rates.velocity_every * rates.position_every) == 0:
                    p, v, a = setpoint(move, t)
                    r, rd, rdd = start + ratio * p, ratio * v, ratio * a
                    command_speed = loops.position.kv * (r - angle)
                if k % rates.velocity_every == 0:
                    filtered += share * ((angle - last_angle) / tv - filtered)
                    last_angle = angle
                    ff, weight = loops.feedforward, loops.velocity.setpoint_weight
                    increment = loops.velocity.kp / loops.velocity.ti * tv
                    increment *= command_speed + ff.velocity * rd - filtered
                    x_torque += increment
                    torque = loops.velocity.kp * (weight * command_speed + ff.velocity * rd - filtered) + x_torque
                    torque += ff.torque * scenario.nominal_inertia * rdd
                    for each in filters:
                        torque = each(torque)
                    ask = torque / kt
                    bound = limits.continuous_current if full else limits.peak_current
                    command = max(-bound, min(bound, ask))
                    if abs(ask) > bound and increment * torque > 0.0:
                        x_torque -= increment
                error = command - current
                gained = loops.current.kp / loops.current.ti * tc * error
                x_voltage += gained
                wanted = loops.current.kp * error + x_voltage
                across = plant.pole_pairs * shaft.state[1] * plant.inductance * current
                circle = math.sqrt(max(limits.voltage**2 - across**2, 0.0))
                before, voltage = voltage, max(-circle, min(circle, wanted))
                if abs(wanted) > circle and gained * wanted > 0.0:
                    x_voltage -= gained
                level = max(0.0, level + (current**2 - limits.continuous_current**2) * tc)
                if level >= full_at:
                    full = True
                elif level <= 0.9 * full_at:
                    full = False
                s = shaft.state
                record.rows.append((t, s[0] - base, s[1], s[2] + windup - base, s[3], s[4], voltage, command))
                if rates.computation_delay > 0.0:
                    shaft.advance(before, rates.computation_delay)
                if rates.computation_delay < tc:
                    shaft.advance(voltage, tc - rates.computation_delay)
            start += ratio * move.distance
        base = start
        record.stops, record.starts = shaft.stops, shaft.starts
    return record
