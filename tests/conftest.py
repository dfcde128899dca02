"""What all tests share: where the open data lie, and that nothing skips where it must not."""

from __future__ import annotations

import json
import os
import shutil
import subprocess
from collections.abc import Callable, Generator
from pathlib import Path
from typing import Any

import pytest
from hypothesis import settings

REPOSITORY = Path(__file__).resolve().parents[1]
SHARED = REPOSITORY.parent / "shared"

settings.register_profile("the same examples every time", derandomize=True)
if os.environ.get("IFCCHECK_NOTHING_SKIPS"):
    # What is merged is judged by what it changed; new examples are looked for everywhere else.
    settings.load_profile("the same examples every time")


@pytest.hookimpl(wrapper=True)
def pytest_runtest_makereport(
    item: pytest.Item, call: pytest.CallInfo[None]
) -> Generator[None, pytest.TestReport, pytest.TestReport]:
    """Turn a skip into a failure where the environment promises that nothing skips."""
    report = yield
    if report.skipped and os.environ.get("IFCCHECK_NOTHING_SKIPS"):
        report.outcome = "failed"
        report.longrepr = f"skipped although nothing may skip here: {report.longrepr}"
    return report


@pytest.fixture(scope="session")
def open_models() -> Path:
    """Folder of the open IFC models made by others."""
    folder = SHARED / "open_models"
    if not folder.is_dir():
        pytest.skip(f"the open models are not beside this checkout ({folder.parent.name}/)")
    return folder


@pytest.fixture(scope="session")
def reference() -> Path:
    """Folder of the published facts and figures."""
    folder = SHARED / "reference"
    if not folder.is_dir():
        pytest.skip(f"the reference data are not beside this checkout ({folder.parent.name}/)")
    return folder


@pytest.fixture(scope="session")
def second_parser() -> Callable[[Path], dict[str, Any]]:
    """Reader of result sets, in node, by a parser that shares no code with the one in use here.

    Returns ``{"instances": n, "sets": [...]}`` as tests/node/read_results.mjs describes it.
    """
    folder = REPOSITORY / "tests" / "node"
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is not installed")
    if not (folder / "node_modules" / "web-ifc").is_dir():
        pytest.skip("web-ifc is not installed: run npm ci --prefix tests/node")

    def read(model: Path) -> dict[str, Any]:
        command = [node, str(folder / "read_results.mjs"), str(model.resolve())]
        done = subprocess.run(command, capture_output=True, check=True, timeout=300)
        found: dict[str, Any] = json.loads(done.stdout)
        return found

    return read


_UNIT_LINES = {
    "mm": """#11=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);
#10=IFCUNITASSIGNMENT((#11));
""",
    "m": """#11=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);
#12=IFCSIUNIT(*,.AREAUNIT.,$,.SQUARE_METRE.);
#13=IFCSIUNIT(*,.FORCEUNIT.,$,.NEWTON.);
#14=IFCSIUNIT(*,.PRESSUREUNIT.,$,.PASCAL.);
#15=IFCDERIVEDUNITELEMENT(#13,1);
#16=IFCDERIVEDUNITELEMENT(#11,-1);
#17=IFCDERIVEDUNITELEMENT(#11,1);
#18=IFCDERIVEDUNIT((#15,#16),.LINEARFORCEUNIT.,${name});
#19=IFCDERIVEDUNIT((#15,#17),.TORQUEUNIT.,${name});
#10=IFCUNITASSIGNMENT((#11,#12,#13,#14,#18,#19));
""",
    "inch": """#20=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);
#21=IFCDIMENSIONALEXPONENTS(1,0,0,0,0,0,0);
#22=IFCMEASUREWITHUNIT(IFCLENGTHMEASURE(0.0254),#20);
#11=IFCCONVERSIONBASEDUNIT(#21,.LENGTHUNIT.,'inch',#22);
#23=IFCSIUNIT(*,.AREAUNIT.,$,.SQUARE_METRE.);
#24=IFCDIMENSIONALEXPONENTS(2,0,0,0,0,0,0);
#25=IFCMEASUREWITHUNIT(IFCAREAMEASURE(0.00064516),#23);
#12=IFCCONVERSIONBASEDUNIT(#24,.AREAUNIT.,'square inch',#25);
#26=IFCSIUNIT(*,.FORCEUNIT.,$,.NEWTON.);
#27=IFCDIMENSIONALEXPONENTS(1,1,-2,0,0,0,0);
#28=IFCMEASUREWITHUNIT(IFCFORCEMEASURE(4.4482216152605),#26);
#13=IFCCONVERSIONBASEDUNIT(#27,.FORCEUNIT.,'pound-force',#28);
#29=IFCSIUNIT(*,.PRESSUREUNIT.,$,.PASCAL.);
#30=IFCDIMENSIONALEXPONENTS(-1,1,-2,0,0,0,0);
#31=IFCMEASUREWITHUNIT(IFCPRESSUREMEASURE(6894.757293168361),#29);
#14=IFCCONVERSIONBASEDUNIT(#30,.PRESSUREUNIT.,'pound-force per square inch',#31);
#15=IFCDERIVEDUNITELEMENT(#13,1);
#16=IFCDERIVEDUNITELEMENT(#11,-1);
#17=IFCDERIVEDUNITELEMENT(#11,1);
#18=IFCDERIVEDUNIT((#15,#16),.LINEARFORCEUNIT.,${name});
#19=IFCDERIVEDUNIT((#15,#17),.TORQUEUNIT.,${name});
#10=IFCUNITASSIGNMENT((#11,#12,#13,#14,#18,#19));
""",
}


@pytest.fixture(scope="session")
def two_beams() -> Callable[..., str]:
    """Maker of a model of two beams, #101 and #102, without bodies.

    Takes the schema and the units: "mm" declares the length alone, "m" and "inch" declare every
    kind of unit that results have.
    """

    def make(schema: str = "IFC4", units: str = "mm") -> str:
        beam_end = ",$" if schema != "IFC2X3" else ""
        unit_lines = _UNIT_LINES[units].format(name=",$" if schema == "IFC4X3_ADD2" else "")
        return f"""ISO-10303-21;
HEADER;
FILE_DESCRIPTION((''),'2;1');
FILE_NAME('','2026-01-01T00:00:00',(''),(''),'','','');
FILE_SCHEMA(('{schema}'));
ENDSEC;
DATA;
#1=IFCPERSON($,'Engineer',$,$,$,$,$,$);
#2=IFCORGANIZATION($,'Office',$,$,$);
#3=IFCPERSONANDORGANIZATION(#1,#2,$);
#4=IFCAPPLICATION(#2,'1','Writer','writer');
#5=IFCOWNERHISTORY(#3,#4,$,.ADDED.,$,$,$,1767225600);
#6=IFCCARTESIANPOINT((0.,0.,0.));
#7=IFCAXIS2PLACEMENT3D(#6,$,$);
#8=IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,1.E-05,#7,$);
{unit_lines}#100=IFCPROJECT('0000000000000000000100',#5,'Hall',$,$,$,$,(#8),#10);
#101=IFCBEAM('0000000000000000000101',#5,'B-1',$,$,$,$,'T1'{beam_end});
#102=IFCBEAM('0000000000000000000102',#5,'B-2',$,$,$,$,'T2'{beam_end});
ENDSEC;
END-ISO-10303-21;
"""

    return make
