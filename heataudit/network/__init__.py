"""One machine in many states: flows and pressures of every phase of a duty cycle."""
