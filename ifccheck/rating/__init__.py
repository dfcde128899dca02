"""Utilisation, rating factor, largest safe load and verdict, on arrays."""

from ifccheck.rating.results import BasisItem, LimitStateRating, Rating, SafeLoad

__all__ = ["BasisItem", "LimitStateRating", "Rating", "SafeLoad"]
