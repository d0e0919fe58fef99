"""Leads, phones, joining codes, one-time links, and who may call what."""
