"""Files: solids, facets and flat sections, each read back before it is trusted, and the report."""
