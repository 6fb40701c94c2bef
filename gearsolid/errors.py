"""Every error a user can meet. Each message says what was given, what is allowed and what to try."""


class GearsolidError(Exception):
    """Root of all errors raised on purpose by this library."""


class DesignError(GearsolidError, ValueError):
    """A design that cannot exist: a number outside its limits, or limits that contradict each other."""


class RecipeError(GearsolidError, ValueError):
    """A recipe that cannot be read: unknown key, wrong type, missing table."""


class ToleranceError(GearsolidError, ArithmeticError):
    """A numerical answer could not be brought within the tolerance asked for."""


class SolidError(GearsolidError, RuntimeError):
    """The CAD kernel returned a body that is not one valid solid of the expected volume."""


class ExportError(GearsolidError, OSError):
    """A file could not be written, or did not read back as what was written."""


class MissingLibraryError(GearsolidError, ImportError):
    """A package or system library needed for this step is not installed."""
