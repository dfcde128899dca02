"""Code-neutral mechanics of sections, on arrays."""
