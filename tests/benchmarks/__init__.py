"""Measurements: ``python -m tests.benchmarks``.  Not collected by pytest: they depend on the machine and its load."""
