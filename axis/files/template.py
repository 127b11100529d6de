"""The text that `settlepoint new FILE` writes: an axis file to start from, which reads as it stands."""

from __future__ import annotations


def template() -> str:
    """A commented axis file; the keys it shows are those of this version."""
    return _TEXT


_TEXT = """\
# An axis file. Every quantity is a text with its unit: "38 kg", "4.1 mH", "300 mm", "3000 rpm", "12 lb", "4 in".
# Counts and ratios are plain numbers. A line that starts with # is a comment: take the # away to state the value.
# What is left out is assumed and told, or makes its checks `not evaluated`. The values below only show the form:
# replace every one of them by your own.
format = 1

[axis]
name = "My axis"
travel = "linear"                      # "rotary": mass becomes inertia, m becomes deg, N becomes N*m
incline = "0 deg"                      # of positive travel above the horizontal; "90 deg" lifts
# ambient = "30 degC"
# indexes = true                       # the cycle need not end where it began

[load]
mass = "38 kg"                         # everything that moves on the empty axis
friction = { coulomb = "22 N", breakaway = "31 N", viscous = "45 N*s/m", stribeck_speed = "4 mm/s" }

[[payload]]                            # optional; moves refer to it by its name
name = "full tray"
mass = "5 kg"

# Stages in order from the motor; none for a direct rotary drive. Inertia, drag and speed limit stand at a stage's
# input, stiffness and torque or force limits at its output.
# [[transmission]]
# kind = "gearbox"
# ratio = 3                            # or use = "DG-064-03", a row of gearboxes.csv
# inertia = "0.3 kg*cm^2"
# efficiency = 0.96
# stiffness = "9 N*m/arcmin"

[[transmission]]
kind = "ball_screw"
lead = "20 mm"
diameter = "25 mm"
length = "1.1 m"
efficiency = 0.92
efficiency_back = 0.90
stiffness = "60 N/um"                  # screw, nut and bearings in series, at the nut
drag = "0.06 N*m"
max_input_speed = "3000 rpm"

[motor]
# use = "DM-071-30"                    # a row of motors.csv; keys that stand beside it override the row
torque_constant = "0.72 N*m/A"
torque_constant_basis = "rms"          # or "peak"; no basis is ever guessed
voltage_constant = "43.5 V/krpm"
voltage_constant_basis = "line-line rms"
resistance = "2.6 ohm"
inductance = "9.4 mH"
winding_basis = "line-line"            # or "phase"
current_basis = "rms"
pole_pairs = 4
inertia = "1.5 kg*cm^2"
rated_torque = "2.4 N*m"
rated_speed = "3000 rpm"
rated_current = "3.4 A"
stall_torque = "2.8 N*m"
stall_current = "3.9 A"
peak_torque = "8.4 N*m"
peak_current = "13 A"
max_speed = "5000 rpm"
encoder_counts = 1048576               # per revolution, after interpolation
# max_winding_temperature = "140 degC" # these five give the winding temperature of the repeated cycle
# winding_housing = "0.37 K/W"
# housing_ambient = "0.76 K/W"
# winding_time_constant = "60 s"
# housing_time_constant = "35 min"

[drive]
# use = "DD-08"                        # a row of drives.csv
continuous_current = "8 A"
peak_current = "20 A"
peak_time = "3 s"
current_basis = "rms"
supply_voltage = "400 V"
supply_phases = 3
# dc_link_max = "820 V"                # its trip; the next five give what becomes of the energy of braking
# dc_link_capacitance = "470 uF"
# chopper_on_voltage = "760 V"
# braking_resistor_resistance = "60 ohm"
# braking_resistor_power = "100 W"
current_period = "62.5 us"
velocity_period = "125 us"
position_period = "250 us"

[window]
position = "25 um"                     # half width of the in-position window
time = "5 ms"                          # inside without a break before the drive reports it
settle_within = "30 ms"                # after the commanded end
following_error = "3 mm"

[[move]]                               # the cycle: moves in order, back to where it began
distance = "300 mm"                    # signed and relative; or to = "..."
speed = "0.6 m/s"
acceleration = "6 m/s^2"               # jerk = "300 m/s^3"; left out, tuning chooses it
dwell = "0.25 s"
payload = "full tray"

[[move]]
distance = "-300 mm"
speed = "0.6 m/s"
acceleration = "6 m/s^2"
dwell = "0.25 s"

[tolerance]                            # relative, plus or minus
load_mass = 0.05
friction = 0.4
torque_constant = 0.05
stiffness = 0.2
supply_voltage = 0.1
"""
