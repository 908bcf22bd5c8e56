"""Criteria and verdict: one criterion a file."""
