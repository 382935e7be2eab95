"""Firmhead: sizes a booster pumping station for a pressure zone."""

__version__ = "0.1.0"
