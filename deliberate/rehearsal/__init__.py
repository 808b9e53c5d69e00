"""One run of the whole computation on a scenario, and what stands out in it."""
