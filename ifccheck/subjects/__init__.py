"""Joins what the model and the brief say of each beam into what its rating rests on."""

from ifccheck.subjects.framed import framed_by_the_model as framed_by_the_model
from ifccheck.subjects.gathering import Gathered as Gathered
from ifccheck.subjects.gathering import gather as gather
from ifccheck.subjects.steel import yield_unknown as yield_unknown
