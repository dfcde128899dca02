"""Where a beam spans by how its ends stand: every length written out beside its expectation."""

from __future__ import annotations

import pytest

from ifccheck.beam import Contact, Given, Support, SupportKind
from ifccheck.frame.carrying import END_TO_END, NOT_CARRIED
from ifccheck.frame.spans import Standing, stand_alone
from tests.test_contacts import beam

BEAM = beam()[0]
"""6000 mm long, 600 mm deep"""


def contact(place: str, side: str, reach: float = 400.0, **more: object) -> Contact:
    """A contact of a member that covers ``reach`` of the beam, or lies so far beyond its end."""
    inside = side == "below"
    start, end = (0.0, reach) if place == "start" else (6000.0 - reach, 6000.0)
    at = 0.0 if place == "start" else 6000.0
    made = Contact(
        "B", f"C-{place} (IfcColumn)", "IfcColumn", start if inside else at, end if inside else at,
        place, side, beyond=0.0 if inside else reach,  # type: ignore[arg-type]
    )  # fmt: skip
    return made._replace(**more)  # type: ignore[arg-type]


def stand(
    *contacts: Contact,
    kinds: tuple[SupportKind, SupportKind] = ("pinned", "pinned"),
    bearings: tuple[float, float] = (0.0, 0.0),
    span: float | None = None,
) -> Standing:
    start, end = (Support(kind, width, "test") for kind, width in zip(kinds, bearings, strict=True))
    stated = None if span is None else Given(span, "brief, beams[1]")
    return stand_alone(BEAM, (start, end), contacts, stated)


def measured(standing: Standing) -> tuple[float, float, float, float]:
    """Start and end of the span, and the two faces."""
    (rated,) = standing.spans
    return (*standing.reach, *rated.faces)


FACING = (contact("start", "end"), contact("end", "end", 300.0))
BELOW = (contact("start", "below"), contact("end", "below", 300.0))


def test_face_to_face_it_spans_from_centre_to_centre() -> None:
    standing = stand(*FACING)
    assert measured(standing) == pytest.approx((-200.0, 6150.0, 0.0, 6000.0))
    assert standing.source == (
        "from the centre of C-start (IfcColumn), 200 mm beyond its start"
        " to the centre of C-end (IfcColumn), 150 mm beyond its end"
    )
    assert [remark.kind for remark in standing.remarks] == ["assumption"]


def test_face_to_face_a_stated_bearing_lies_beyond_the_end() -> None:
    standing = stand(*FACING, bearings=(240.0, 500.0))
    assert measured(standing) == pytest.approx((-120.0, 6250.0, 0.0, 6000.0))
    assert standing.remarks == ()


def test_the_clear_span_plus_the_depth_need_not_be_exceeded() -> None:
    """Into a wall along its axis 4 m long, and a bearing said to be 900: half a depth is 300."""
    standing = stand(contact("start", "end", 4000.0), FACING[1], bearings=(0.0, 900.0))
    assert measured(standing) == pytest.approx((-300.0, 6300.0, 0.0, 6000.0))
    assert standing.source == (
        "from half its depth, 300 mm beyond its start to half its depth, 300 mm beyond its end"
    )


def test_on_a_member_the_bearing_lies_within() -> None:
    assert measured(stand(*BELOW)) == pytest.approx((0.0, 6000.0, 0.0, 6000.0))
    told = stand(*BELOW, bearings=(400.0, 200.0))
    assert measured(told) == pytest.approx((200.0, 5900.0, 400.0, 5800.0))


def test_one_end_on_a_member_and_one_against_a_face() -> None:
    standing = stand(BELOW[0], FACING[1], bearings=(400.0, 0.0))
    assert measured(standing) == pytest.approx((200.0, 6150.0, 400.0, 6000.0))
    both = stand(BELOW[0], *FACING)
    assert measured(both) == pytest.approx((-200.0, 6150.0, 0.0, 6000.0))


def test_what_only_comes_near_counts_where_nothing_surer_does() -> None:
    """A joint of 20 mm before the column: the beam of a corbel spans from its corbel."""
    open_joint = contact("start", "end", bears=False)
    assert measured(stand(open_joint, FACING[1]))[0] == pytest.approx(-200.0)
    assert measured(stand(open_joint, *BELOW, bearings=(400.0, 0.0)))[0] == pytest.approx(200.0)
    girder = contact("start", "end", doubt=NOT_CARRIED)
    assert measured(stand(girder, FACING[1]))[0] == pytest.approx(-200.0)
    collinear = contact("start", "end", 6000.0, doubt=END_TO_END)
    assert measured(stand(collinear, FACING[1]))[0] == pytest.approx(0.0)


def test_without_contact_only_the_face_moves_in() -> None:
    """Nothing shows the centre, so that the span is not shortened; the width tells the face."""
    assert measured(stand()) == pytest.approx((0.0, 6000.0, 0.0, 6000.0))
    told = stand(bearings=(400.0, 300.0))
    assert measured(told) == pytest.approx((0.0, 6000.0, 400.0, 5700.0))


def test_a_cantilever_spans_from_the_face() -> None:
    kinds: tuple[SupportKind, SupportKind] = ("fixed", "free")
    assert measured(stand(FACING[0], kinds=kinds)) == pytest.approx((0.0, 6000.0, 0.0, 6000.0))
    lying = stand(BELOW[0], kinds=kinds, bearings=(400.0, 0.0))
    assert measured(lying) == pytest.approx((400.0, 6000.0, 400.0, 6000.0))
    back = stand(FACING[1], kinds=("free", "fixed"), bearings=(0.0, 400.0))
    assert measured(back) == pytest.approx((0.0, 6000.0, 0.0, 6000.0))


def test_a_stated_span_replaces_the_length_and_not_the_faces() -> None:
    standing = stand(*FACING, span=6400.0)
    assert measured(standing) == pytest.approx((-225.0, 6175.0, 0.0, 6000.0))
    assert standing.source == "brief, beams[1]"
    assert (standing.reasons, standing.remarks) == ((), ())


@pytest.mark.parametrize(
    ("contacts", "bearings", "clear"),
    [
        (FACING, (0.0, 0.0), 6000.0),
        (FACING, (240.0, 240.0), 6000.0),
        (BELOW, (0.0, 0.0), 6000.0 - 400.0 - 300.0),
        (BELOW, (500.0, 0.0), 6000.0 - 400.0 - 300.0),
        ((), (500.0, 400.0), 6000.0 - 900.0),
        ((), (0.0, 0.0), 0.9 * 6000.0),
    ],
)
def test_a_stated_span_less_than_the_clear_one_is_refused(
    contacts: tuple[Contact, ...], bearings: tuple[float, float], clear: float
) -> None:
    assert not stand(*contacts, bearings=bearings, span=clear).reasons
    (reason,) = stand(*contacts, bearings=bearings, span=clear - 40.0).reasons
    assert reason.blocking
    assert reason.text == (
        f"the stated span of {(clear - 40.0) / 1000.0:.2f} m (brief, beams[1]) is less than the"
        f" {clear / 1000.0:.2f} m between the faces of its supports"
    )


@pytest.mark.parametrize("overlap", [0.0, 5.0, 12.0, 100.0, 190.0])
@pytest.mark.parametrize("bearing", [0.0, 400.0])
def test_the_span_is_centre_to_centre_however_far_an_end_is_drawn_into_its_column(
    overlap: float, bearing: float
) -> None:
    """Columns 400 wide; the beam of 6000 is drawn ``overlap`` into either of them."""
    side = "below" if overlap > 10.0 else "end"
    reach = overlap if side == "below" else 0.0
    ends = [contact(end, side, reach, beyond=400.0 - overlap) for end in ("start", "end")]
    if side == "end":
        ends = [
            ends[0]._replace(end=overlap),
            ends[1]._replace(start=6000.0 - overlap),
        ]
    (rated,) = stand(*ends, bearings=(bearing, bearing)).spans
    assert rated.length == pytest.approx(6000.0 - 2.0 * overlap + 400.0)


def test_a_cantilever_spans_from_the_face_and_says_so() -> None:
    standing = stand(FACING[0], kinds=("fixed", "free"), bearings=(400.0, 0.0))
    assert measured(standing)[:2] == pytest.approx((0.0, 6000.0))
    assert standing.source == "from the face of its support to its free end"
