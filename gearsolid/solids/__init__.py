"""Bodies as CAD solids: the only place, besides the writers of CAD files, that loads the CAD kernel."""

from gearsolid.errors import MissingLibraryError

try:
    import cadquery as _cadquery  # noqa: F401
except ImportError as error:
    if "libGL.so.1" in str(error):
        raise MissingLibraryError(
            "the CAD kernel needs the system library libGL.so.1, which is not installed; on Debian and Ubuntu install "
            "the package libgl1 (apt-get install libgl1)"
        ) from error
    raise MissingLibraryError(
        f"the CAD kernel does not load ({error}); solids and CAD files need the package cadquery 2.8 or newer"
    ) from error
