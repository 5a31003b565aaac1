"""What the components of the plant see with a refrigerant: numbers only, judged in `retrofit.checks`."""
