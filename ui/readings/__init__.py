"""Parts of the readings stop: where readings come from, columns, geometry, points."""
