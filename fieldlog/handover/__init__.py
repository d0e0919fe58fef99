"""Handing over: batches in, changes out, photos."""
