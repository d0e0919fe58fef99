"""Files of others into a survey: read, shown, and written only when the lead says so."""
