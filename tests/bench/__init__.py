"""Benches: what must be quick, measured against a stated budget by `python -m tests.bench`."""
