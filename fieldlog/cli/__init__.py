"""The command line: one module a command; each reads options, calls, prints."""
