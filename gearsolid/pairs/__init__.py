"""Members put together: pairs, planetary stages, reducers; how their parts move and which of them can touch."""
