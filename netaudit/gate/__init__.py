"""Many boards and what a change made of them: running, keeping, waiving, comparing."""
