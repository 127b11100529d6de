"""Each figure once, as a neutral description drawn for screen or paper."""
