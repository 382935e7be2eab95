"""Checks against published values: data with its source beside it, one test module a topic."""
