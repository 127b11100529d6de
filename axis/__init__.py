"""Settlepoint: size and tune a positioning axis before it exists."""
