"""The formulas of the trade, pure: psi, gpm, ft and in; floats or arrays in, the same out."""
