"""Motion laws, the jerk-limited move, the cycle."""
