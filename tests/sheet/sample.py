"""A study made by hand: the real dataclasses, filled with invented figures, so that nothing has to be computed."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from axis.complete import complete
from axis.completion import CompletedAxis
from axis.description.settings import CurrentLoop, Feedforward, Loops, PositionLoop, TorqueFilter, VelocityLoop
from axis.files.axis_file import Document, read_text
from axis.loops.margins import Margins
from axis.settling.verdict import CornerOutcome, Settled, judge
from axis.simulation.record import MoveOutcome, Outcome, Trace
from axis.sizing.size import size
from axis.study import Study
from axis.tuning.result import Reference, Step, Tuned

CORNER = {"load_mass": 0.05, "friction": -0.4, "torque_constant": -0.05, "stiffness": -0.2, "supply_voltage": -0.1}
WINDOW = 25e-6
COMMANDED_END = 0.61
NAME, PAYLOAD = "Sample axis (invented)", "full tray"

TEXT = """
format = 1
[axis]
name = "Sample axis (invented)"
travel = "linear"
ambient = "30 degC"
[load]
mass = "83.8 lb"
friction = { coulomb = "22 N", breakaway = "31 N", viscous = "45 N*s/m" }
[[payload]]
name = "full tray"
mass = "5 kg"
[[transmission]]
kind = "ball_screw"
lead = "20 mm"
diameter = "25 mm"
length = "0.7 m"
efficiency = 0.94
stiffness = "4.6 N/um"
damping_ratio = 0.03
drag = "0.05 N*m"
[motor]
torque_constant = "0.72 N*m/A"
torque_constant_basis = "rms"
resistance = "2.6 ohm"
inductance = "9.4 mH"
winding_basis = "line-line"
pole_pairs = 4
inertia = "1.5 kg*cm^2"
rated_torque = "2.4 N*m"
rated_speed = "3000 rpm"
stall_torque = "2.8 N*m"
peak_torque = "8.4 N*m"
max_speed = "5000 rpm"
[drive]
continuous_current = "8 A"
peak_current = "20 A"
current_basis = "rms"
supply_voltage = "400 V"
[window]
position = "25 um"
time = "12 ms"
settle_within = "45 ms"
following_error = "3 mm"
[[move]]
distance = "300 mm"
speed = "0.6 m/s"
acceleration = "6 m/s^2"
dwell = "0.2 s"
payload = "full tray"
[[move]]
distance = "-300 mm"
speed = "0.6 m/s"
acceleration = "6 m/s^2"
dwell = "0.2 s"
[tolerance]
load_mass = 0.05
friction = 0.4
torque_constant = 0.05
stiffness = 0.2
supply_voltage = 0.1
"""

LOOPS = Loops(
    current=CurrentLoop(kp=22.0, ti=4.7e-3),
    velocity=VelocityLoop(kp=1.9, ti=6e-3, setpoint_weight=0.4, filter=0.2e-3),
    position=PositionLoop(kv=85.0),
    feedforward=Feedforward(velocity=1.0, torque=0.95),
    filters=(
        TorqueFilter(kind="lowpass", frequency=2.0 * math.pi * 800.0),
        TorqueFilter(kind="notch", frequency=2.0 * math.pi * 210.0, width=2.0 * math.pi * 60.0, depth=0.1),
    ),
    move_jerk=(311.1, 287.4),
)

NOMINAL = MoveOutcome(
    commanded_end=COMMANDED_END,
    observed=COMMANDED_END + 0.2,
    time_to_window=COMMANDED_END + 0.0123,
    signal=COMMANDED_END + 0.0265,
    signal_last=COMMANDED_END + 0.0265,
    signal_losses=0,
    signal_early=-0.0142,
    overshoot=3.2e-6,
    undershoot=1.1e-6,
    following_error=0.42e-3,
    rest_error=-1.3e-6,
    peak_torque=4.1,
    peak_current=5.8,
    peak_speed=188.5,
    current_saturated=0.0,
    voltage_saturated=0.0,
    bucket_peak=0.08,
    tripped=False,
    current_square_time=4.4,
    current_ripple=0.05,
)
WORST = replace(
    NOMINAL,
    time_to_window=COMMANDED_END + 0.0312,
    signal=COMMANDED_END + 0.0447,
    signal_last=COMMANDED_END + 0.0447,
    signal_early=-0.0135,
    overshoot=14.7e-6,
    peak_torque=4.9,
    peak_current=7.2,
)
NEVER = replace(
    WORST, time_to_window=math.inf, signal=math.inf, signal_last=math.inf, signal_early=-math.inf, rest_error=61e-6
)
MARGINS = Margins(True, 9.3, math.inf, 41.2, 1.74)


def document(name: str = NAME, loops: Loops | None = LOOPS, text: str = TEXT, payload: str = PAYLOAD) -> Document:
    """The sample axis under other names and with settings."""

    def quoted(one: str) -> str:
        return one.replace("\\", "\\\\").replace('"', '\\"')

    read = read_text(text.replace(NAME, quoted(name)).replace(PAYLOAD, quoted(payload)))
    return replace(read, axis=replace(read.axis, loops=loops))


def settled(axis: CompletedAxis, worst: MoveOutcome = WORST) -> Settled:
    """Two moves over two corners."""
    nominal = Outcome((NOMINAL, NOMINAL), 3, True, False, 0.0)
    bad = Outcome((worst, worst), 3, True, False, 0.0)
    return judge(axis, [CornerOutcome({}, nominal), CornerOutcome(CORNER, bad)], nominal)


def tuned(axis: CompletedAxis) -> Tuned:
    """A result that holds beside textbook settings that do not."""
    result = Reference(LOOPS, MARGINS, CORNER, settled(axis))
    textbook = Reference(
        replace(LOOPS, position=PositionLoop(kv=40.0)),
        replace(MARGINS, peak_sensitivity=1.9),
        CORNER,
        settled(axis, NEVER),
    )
    path = (Step("order 3 with a real pole", math.inf, 40, True), Step("search on the worst corner", 1.29, 0, True))
    return Tuned(result, textbook, path, 1.06, 0.71, 1, 12_000, True, True, "")


def study(name: str = NAME, payload: str = PAYLOAD) -> Study:
    """Tuned and checked."""
    stated = document(name, payload=payload)
    axis = complete(stated.axis)
    search = tuned(axis)
    return Study(stated, axis, sizing=size(axis), tuned=search, settled=search.result.settled)


def trace(move_count: int = 2, amplitude: float = 300e-6) -> Trace:
    """Every move a ramp, then a decaying swing of the load around its target."""
    step, period = 62.5e-6, COMMANDED_END + 0.2
    time = np.arange(0.0, move_count * period, step)
    within = np.mod(time, period)
    move = np.minimum((time // period).astype(int), move_count - 1)
    share = np.minimum(within / COMMANDED_END, 1.0)
    setpoint = np.where(move % 2 == 0, 0.3 * share, 0.3 * (1.0 - share))
    swing = (
        amplitude * np.exp(-(within - COMMANDED_END) / 0.012) * np.sin(2.0 * math.pi * 45.0 * (within - COMMANDED_END))
    )
    load = setpoint + np.where(within > COMMANDED_END, swing, 0.0)
    nothing = np.zeros_like(time)
    starts = np.arange(move_count) * period
    return Trace(
        time, setpoint, load, setpoint, nothing, 188.5 * np.sin(time), nothing, nothing, nothing, 4.0 * np.cos(time),
        starts, starts + COMMANDED_END,
    )  # fmt: skip
