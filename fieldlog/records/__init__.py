"""Frozen records that pass between the floors; no rules, no storage, no sentences."""
