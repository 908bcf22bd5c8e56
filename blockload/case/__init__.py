"""The case file: read, checked, converted to SI and the car's axes."""
