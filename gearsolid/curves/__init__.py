"""Plane curves: roulettes, envelopes, parallels, fits, outlines and their distance fields. numpy and scipy only."""
