"""What acts on beams: stations, statics, combinations, on arrays."""
