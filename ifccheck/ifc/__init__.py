"""All that touches IFC: opening, reading, selecting and writing back."""
