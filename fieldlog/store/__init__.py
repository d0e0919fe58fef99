"""The central database: ledger, projected tables, cursor, photos."""
