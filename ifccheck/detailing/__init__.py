"""Reinforcement that is described by number, not by place, laid out as a detailer would."""

from ifccheck.detailing.layout import Layout, lay_out
from ifccheck.detailing.sources import Chosen, choose_source

__all__ = ["Chosen", "Layout", "choose_source", "lay_out"]
