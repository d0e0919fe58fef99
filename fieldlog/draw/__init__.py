"""Numbers to shapes, shapes to SVG text."""
