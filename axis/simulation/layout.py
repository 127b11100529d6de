"""Where each number stands in the flat vectors that the compiled kernel reads and writes. All SI, all float64."""

from __future__ import annotations

# One plant at the motor shaft, in the order of the fields of `ShaftPlant`.
(
    MOTOR_INERTIA,  # [kg·m²]
    LOAD_INERTIA,  # [kg·m²]
    STIFFNESS,  # [N·m/rad] infinite: rigid
    DAMPING,  # [N·m·s/rad]
    MOTOR_COULOMB,  # [N·m]
    COULOMB,  # [N·m]
    BREAKAWAY,  # [N·m]
    VISCOUS,  # [N·m·s/rad]
    STRIBECK_SPEED,  # [rad/s]
    LOAD_TORQUE,  # [N·m]
    TORQUE_CONSTANT,  # [N·m/A]
    VOLTAGE_CONSTANT,  # [V·s/rad]
    RESISTANCE,  # [ohm]
    INDUCTANCE,  # [H]
    POLE_PAIRS,  # [1]
    PLANT_SIZE,
) = range(16)

# The drive at one corner of its supply.
(
    CONTINUOUS_CURRENT,  # [A]
    PEAK_CURRENT,  # [A]
    BUCKET_CAPACITY,  # [A²·s]
    VOLTAGE_LIMIT,  # [V]
    COUNT_ANGLE,  # [rad] of one encoder count; 0: no quantisation
    LIMITS_SIZE,
) = range(6)

# What does not change while settings are searched.
(
    CURRENT_PERIOD,  # [s]
    VELOCITY_EVERY,  # [1] current periods
    POSITION_EVERY,  # [1] velocity periods
    COMPUTATION_DELAY,  # [s]
    NOMINAL_CONSTANT,  # [N·m/A] by which the drive divides a torque command
    WINDOW,  # [rad] at the shaft
    WINDOW_SAMPLES,  # [1] position periods that the signal waits
    FRAME_SIZE,
) = range(8)

# The settings.
(
    CURRENT_GAIN,  # [V/A]
    CURRENT_STEP,  # [V/A] kp·Tc/ti
    VELOCITY_GAIN,  # [N·m·s/rad]
    VELOCITY_STEP,  # [N·m·s/rad] Kp·a·Tv
    SETPOINT_WEIGHT,  # [1] b
    VELOCITY_FEEDFORWARD,  # [1] f
    TORQUE_FEEDFORWARD,  # [kg·m²] share times nominal inertia
    VELOCITY_FILTER,  # [1] share taken of each new velocity
    POSITION_GAIN,  # [1/s]
    FILTER_COUNT,  # [1]
    FILTERS,  # five coefficients each from here on: b0, b1, b2, a1, a2
) = range(11)
MAX_FILTERS = 4
GAINS_SIZE = FILTERS + 5 * MAX_FILTERS

# One move of the cycle.
(
    START,  # [rad] set-point at its first sample
    TARGET,  # [rad]
    DIRECTION,  # [1] sign of its travel at the shaft
    DURATION,  # [s] to the commanded end
    PERIODS,  # [1] position periods from its first sample to that of the next move
    MOVE_SIZE,
) = range(6)

# What is observed of one move; shaft units inside the kernel.
(
    TIME_TO_WINDOW,  # [s] infinite: still outside at the end
    OVERSHOOT,  # [rad]
    UNDERSHOOT,  # [rad]
    FOLLOWING_ERROR,  # [rad]
    SIGNAL,  # [s] first assertion; infinite: never
    SIGNAL_LAST,  # [s] last assertion
    SIGNAL_LOSSES,  # [1]
    SIGNAL_EARLY,  # [s] time to window less first assertion: positive, the signal lies
    REST_ERROR,  # [rad] signed, at the end of the dwell
    PEAK_CURRENT_SEEN,  # [A]
    PEAK_TORQUE,  # [N·m]
    PEAK_SPEED,  # [rad/s]
    CURRENT_SATURATED,  # [s]
    VOLTAGE_SATURATED,  # [s]
    BUCKET_PEAK,  # [A²·s]
    TRIPPED,  # [1] 0 or 1
    CURRENT_SQUARE,  # [A²·s]
    CURRENT_RIPPLE,  # [A] peak to peak over the last quarter of the dwell
    FIGURES_SIZE,
) = range(19)

# One row of a trace.
(
    TRACE_TIME,  # [s]
    TRACE_SETPOINT,  # [rad]
    TRACE_MOTOR_ANGLE,  # [rad]
    TRACE_MOTOR_SPEED,  # [rad/s]
    TRACE_TWIST,  # [rad] motor angle less load angle
    TRACE_LOAD_SPEED,  # [rad/s]
    TRACE_CURRENT,  # [A]
    TRACE_VOLTAGE,  # [V] that will act after the computation delay
    TRACE_COMMAND,  # [A]
    TRACE_LOAD_POSITION,  # [rad] from the rest under the static load
    TRACE_SIZE,
) = range(11)
