"""Science: arrays in, numbers out. No web, no database; radians inside, degrees at the edge."""
