"""Solids, friction, transmission stages, reflection and compliance."""
