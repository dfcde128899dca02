"""Opening and write-back against ifcopenshell on the same file, in one run.

Run: .venv/bin/python tests/benchmarks/write_back.py MODEL.ifc
(for instance one that ../shared/bench/frame_model.py makes with --storeys 9 --bx 10 --by 10:
1,980 beams and 51,000 bars). Times are processor seconds, the best of three.
"""

from __future__ import annotations

import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ifcopenshell

from ifccheck.ifc.identity import RESULT_SET_NAMES
from ifccheck.ifc.lexer import scan
from ifccheck.ifc.opening import OpenedModel, open_model
from ifccheck.ifc.writeback import rated_bytes
from ifccheck.outputs import write_all
from ifccheck.result_sets import ResultProperty, ResultSet

P = ResultProperty
PROPERTIES = {
    "BeamRating_Result": (
        P("Verdict", "label", "falls short"),
        P("Adequate", "logical", False),
        P("Utilisation", "real", 1.0345678),
        P("GoverningLimitState", "label", "shear"),
        P("GoverningClause", "label", "11.3.6.3"),
        P("GoverningPosition", "length", 2100.0),
        P("LimitStatesChecked", "text", "flexure, shear"),
        P("Reason", "text", "it's short by 3 %"),
        P("Standard", "label", "CSA A23.3-14"),
        P("Basis", "identifier", "0f3a5c"),
    ),
    "BeamRating_LimitStates": (P("FlexureSagging", "real", 0.91), P("Shear", "real", 1.0345678)),
    "BeamRating_SafeLoads": (P("press factor", "real", 0.87), P("press safe load", "force", 52e3)),
    "BeamRating_Basis": tuple(P(f"Item {n}", "text", "30 MPa, the model") for n in range(8)),
}


def result_sets(opened: OpenedModel) -> list[ResultSet]:
    return [
        ResultSet(beam.id(), beam.GlobalId, 0, name, PROPERTIES[name])
        for beam in opened.file.by_type("IfcBeam")
        for name in RESULT_SET_NAMES
    ]


def best(action: Callable[[], Any]) -> float:
    times = []
    for _ in range(3):
        start = time.process_time()
        action()
        times.append(time.process_time() - start)
    return min(times)


def main(path: Path, folder: Path) -> None:
    source = path.read_bytes()
    opened = open_model(path)
    sets = result_sets(opened)
    rated = rated_bytes(opened, sets)
    plain_open = best(lambda: ifcopenshell.open(str(path)))
    whole_write = best(lambda: opened.file.write(str(folder / "whole.ifc")))
    for name, action in {
        "scan": lambda: scan(source),
        "open_model": lambda: open_model(path),
    }.items():
        taken = best(action)
        print(f"{name:12} {taken:6.3f} s   {taken / plain_open:5.2f} x ifcopenshell.open")
    append = best(lambda: write_all({folder / "rated.ifc": rated_bytes(opened, sets)}))
    taken = append + best(lambda: scan(source))
    print(f"{'write-back':12} {taken:6.3f} s   {taken / whole_write:5.2f} x file.write (aim 0.40)")
    print(f"{len(opened.scan.ids)} instances, {len(sets)} sets, {len(rated) - len(source)} bytes")


if __name__ == "__main__":
    with tempfile.TemporaryDirectory() as made:
        main(Path(sys.argv[1]), Path(made))
