"""What stands in the plant: compressors, heat exchangers, pipes, valves, vessels, and how they balance."""
