"""Tables of pipe, fittings and outlets, each with its source."""
