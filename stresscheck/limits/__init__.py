"""Ratings and derating policies: what a part may carry, and which document says so."""
