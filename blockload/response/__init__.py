"""The response of a free block to unit loads, solved once and kept."""
