"""Ergbook: offline field notebook and statistics desk for dune and desert surveys."""
