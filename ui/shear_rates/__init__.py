"""Parts of the shear rates stop: the line's wall rates, and the converter."""
