"""Solid cycloidal and planetary gear bodies for CadQuery, and a roll test that says whether they bind.

Every name below is loaded on first use: `import gearsolid` itself loads neither numpy nor the CAD kernel.
"""

__version__ = "0.1.0"
