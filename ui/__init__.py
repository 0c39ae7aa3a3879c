"""The page: a thin layer that shows what ``rheo`` works out.

`app.py` is the main script; `stops/` holds one file a stop of the walk; `state.py` is the only
place that keeps anything between two runs of the script.
"""
