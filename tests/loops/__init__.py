"""Loops: current, velocity and position design, prototypes, margins."""
