"""Demand, checks and the physical bound of a move."""
