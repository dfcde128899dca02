"""How beams stand: contacts and spans."""
