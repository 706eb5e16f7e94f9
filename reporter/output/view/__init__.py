"""What the report shows: `build.py` makes the view, `model.py` says what it is."""
