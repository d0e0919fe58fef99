"""Ergbook: offline field notebook and statistics desk for dune and desert surveys."""

__version__ = "0.1.0"
