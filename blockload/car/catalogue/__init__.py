"""The catalogue of standard situations, built with the car's own figures."""
