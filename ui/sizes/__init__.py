"""Parts of the sizes stop: comparison on the way, choice, limits and costs."""
