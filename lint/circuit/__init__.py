"""The circuit: its graph, the solver, the worst case, and what round a controller means what."""
