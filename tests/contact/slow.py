"""The independent check of the roll test, under the names the tests use."""

from gearsolid.contact.polygons import DenseOutline
from gearsolid.contact.polygons import PolygonPair as SlowPair

__all__ = ["DenseOutline", "SlowPair"]
