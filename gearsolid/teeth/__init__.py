"""Tooth systems: each member gives the outline of one pitch, made by rolling."""
