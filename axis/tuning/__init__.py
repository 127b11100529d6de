"""Search for loop settings on the simulation."""
