"""Files that come in and go out: readings of past years as CSV, entries as JSON Lines."""
