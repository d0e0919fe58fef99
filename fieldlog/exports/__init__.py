"""Files for a GIS, a table or a handheld: one stream of rows, one module a format."""
