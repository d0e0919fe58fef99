"""The sheets: what may be said about a survey, declared once."""
