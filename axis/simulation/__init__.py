"""The compiled simulation of the axis, its scenario and its record."""
