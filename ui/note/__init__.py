"""Parts of the note stop: files to download, and the preview."""
