"""Entries as plain values: naming, clocks, merging and projecting them. No database here."""
