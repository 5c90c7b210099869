"""One module a kind of entry: its type, units, limits, cautions, labels; and the reading of entries into histories."""
