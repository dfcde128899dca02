"""The engineer's brief: read, validated to the key, and laid on the beams of a run."""
