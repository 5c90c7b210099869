"""The catalogue of standards as data, and what turns it into an approved rule profile."""
