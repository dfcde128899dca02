"""ifccheck: rate every reinforced-concrete beam of an IFC model by a published standard."""

__version__ = "0.1.0"
