"""One file a stop of the walk; each is a script that `app.py` runs."""
