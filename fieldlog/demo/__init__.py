"""Invented sites with ten years of history; they use the services like any office."""
