"""Parts of the route stop: duty, vessels, tables of parts, one part in detail, pump."""
