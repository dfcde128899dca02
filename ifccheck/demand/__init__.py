"""What acts on beams that stand in a building: lines, patterns, and reactions passed on."""
