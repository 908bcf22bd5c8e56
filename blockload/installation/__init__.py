"""The installed block: pads between tub and gearbox, all cases on one small dense system."""
