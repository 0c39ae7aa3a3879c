"""Parts of the pressure stop: what-if controls, and the views of the line."""
