"""One module a kind of entry: type, units, limits, cautions, labels; and entries read into histories."""
