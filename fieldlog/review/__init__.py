"""The lead's evening: day sheet, site sheets, the history of an observation."""
