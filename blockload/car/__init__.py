"""The car as seven rigid bodies: from its figures and manoeuvres to balanced loads on each of them."""
