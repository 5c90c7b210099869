"""Sentences for people, in the units they read: pure functions from codes and numbers to plain text."""
