"""Files: STEP, STL and the report, each read back before it is trusted."""
