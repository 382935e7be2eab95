"""An assessment is a pure function of the document, kept while the document is the same."""

from typing import cast

from server.station import paths
from server.station.canonical import canonical_bytes, document_hash
from server.studies import assess as assess_module
from server.studies.assess import KEPT, assess, forget, proposed_of
from server.studies.duty_result import DutyResult
from server.studies.findings import requirement_words
from server.studies.findings.compliance import departures
from server.studies.shapes import Verdict
from tests.studies.findings.demo import LOW, SET, assessed, demo, edited, insert, put, q, remove


def test_same_document_is_assessed_once() -> None:
    forget()
    first = assess(demo(), document_hash(canonical_bytes(demo())))
    assert assess(demo()) is first


def test_changed_document_is_assessed_anew() -> None:
    assert assessed(edited(put(LOW, q(-30, "kPa")))) is not assessed(demo())


def test_only_the_last_assessments_are_kept() -> None:
    forget()
    station = demo()
    for number in range(KEPT + 3):
        assess(paths.put(station, "/identity/number", f"HM-{number}"))
    assert len(assess_module._kept) == KEPT


def test_findings_on_a_sheet_are_those_it_can_mend() -> None:
    assessment = assessed(demo())
    supply = {finding.code for finding in assessment.findings_on("supply")}
    assert {"suction_main_low", "flow_test_extrapolated"} <= supply
    assert "region_outside" not in supply
    assert "region_outside" in {finding.code for finding in assessment.findings_on("pumps")}
    assert assessment.findings_on("summary") == assessment.findings


def test_station_with_all_mended_and_checked_holds() -> None:
    zone = {
        "loss": q(2, "m"), "at_flow": q(100, "L/s"), "source_grade": q(160, "m"),
        "lowest_customer_level": q(125, "m"), "maximum_day": q(30, "L/s"),
        "peak_hour": q(50, "L/s"), "fire_flow": q(25, "L/s"),
    }  # fmt: skip
    steps = [put(f"/supply/supplying_zone/{name}", value) for name, value in zone.items()]
    station = edited(
        *steps,
        put(LOW, q(0, "kPa")),
        put("/horizons/hz-0pn8ra/demand/minimum_night", q(5.2, "L/s")),
    )
    assessment = assessed(station)
    assert assessment.holds is True
    said = assessment.lead("si")
    assert (
        said
        == "Set “Three mains, standby, jockey” holds every requirement that is judged to 2047."
    )


def test_not_checked_requirement_leaves_it_open_whether_the_set_holds() -> None:
    station = edited(
        put(LOW, q(0, "kPa")), put("/horizons/hz-0pn8ra/demand/minimum_night", q(5.2, "L/s"))
    )
    assessment = assessed(station)
    assert assessment.holds is None
    assert "is not known: 1 thing is not checked" in assessment.lead("si")


def test_set_that_is_not_proposed_does_not_decide() -> None:
    other = paths.get_json(demo(), SET)
    copy = {**other, "id": "st-zzzzzz", "title": "Without jockey"}  # type: ignore[dict-item]
    copy["slots"] = [{**slot, "id": f"{slot['id'][:-1]}z"} for slot in copy["slots"]]  # type: ignore[index, union-attr, call-overload]
    station = edited(insert("/sets", copy), remove("/sets/st-zzzzzz/slots/sl-j5h8kz"))  # type: ignore[arg-type]
    assessment = assessed(station)
    assert set(assessment.results) == {"st-v3a7pe", "st-zzzzzz"}
    assert proposed_of(station) == "st-v3a7pe"
    assert all(f.pump_set in (None, "st-zzzzzz") for f in assessment.findings_for("st-zzzzzz"))
    assert "st-zzzzzz" not in (assessment.lead("si"))


def test_compliance_has_a_row_for_every_criterion_with_its_worst_number() -> None:
    assessment = assessed(demo())
    rows = {row.criterion.key: row for row in assessment.compliance}
    assert list(rows) == list(assessment.criteria)
    assert rows["suction-gauge-minimum"].verdict is Verdict.DOES_NOT_MEET
    assert rows["firm-units-out"].verdict is Verdict.DOES_NOT_MEET
    assert rows["preferred-region-low"].verdict is Verdict.DOES_NOT_MEET
    assert rows["pressure-per-speed-max"].verdict is Verdict.MEETS
    assert rows["supplying-zone-fire-min"].verdict is Verdict.NOT_CHECKED
    assert rows["hours-outside-region"].verdict is Verdict.NOT_CHECKED
    required, provided, verdict, where = requirement_words.compliance_words(
        rows["suction-gauge-minimum"], demo(), "si"
    )
    assert (required, provided, verdict) == ("140\u00a0kPa", "128.9\u00a0kPa", "Does not meet")
    assert where == "maximum day and fire, design, low supply, P4 out"


def test_departures_are_listed_with_their_reason() -> None:
    station = edited(
        put("/criteria/rows/suction-main-minimum/limit", q(100, "kPa")),
        put("/criteria/rows/suction-main-minimum/reason", "agreed with the utility"),
    )
    (row,) = departures(assessed(station).compliance)
    assert row.criterion.key == "suction-main-minimum"
    assert row.criterion.reason == "agreed with the utility"


def test_result_carries_the_document_it_is_of() -> None:
    result = cast(DutyResult, assessed(demo()).for_set("st-v3a7pe"))
    assert result.stamp.document == document_hash(canonical_bytes(demo()))
