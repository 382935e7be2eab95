"""The job and the basis of design: what the station is for, and by which rules it is judged."""

from server.memo.blocks import Block, Facts, Heading, Items, Paragraph, Spans
from server.memo.source import MemoSource
from server.station import fields

PROFILES = {"si_municipal": "SI, municipal", "us_municipal": "US, municipal"}
METHOD: tuple[str, ...] = (
    "Water: density and viscosity by IAPWS SR6-08, vapour pressure by IAPWS-IF97, atmosphere "
    "by the US"
    " Standard Atmosphere 1976.",
    "Friction: Darcy-Weisbach with Colebrook-White, or Hazen-Williams, as each reach says; "
    "fittings by K.",
    "Supplying main by flow test: pressure falls with flow to the power 1/0.54 (NFPA 291); "
    "low, normal and"
    " high are shifts of the whole curve.",
    "Pumps: rows joined by a shape-preserving cubic, nothing read past the last row; at "
    "another speed by the"
    " affinity laws, NPSH required by the power of speed that is stated with the pump.",
    "Zone losses grow with flow to the power 1.852 (common practice).",
    "Every scenario is solved at low, normal and high supply, suction and discharge in one "
    "solve; the"
    " control produces a state, the requirements judge it.",
    "Gauge pressures count from the total grade line (density times 9.80665 m/s² times the "
    "height of the line over the gauge); velocity head is not subtracted.",
    "A computed pressure below a vacuum is no pressure: there is no water at that place, the "
    "main drains or the column breaks. Without an altitude the vacuum is that of the heaviest "
    "air, at −400 m.",
    "Pressure ratings of the main are judged at the lowest level entered for each reach, else "
    "at the discharge gauge; lower down the pressure is higher.",
)


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    station = of.station
    identity = station.identity
    rows: list[tuple[str, Spans]] = [
        (name, (text,))
        for name, text in (
            ("Station", identity.title),
            ("Place", identity.place),
            ("Water utility", identity.client),
            ("Job number", identity.number),
            ("Datum of levels", station.site.datum),
            ("Zone", station.zone.title),
            ("Supply", station.supply.title),
            (
                "Criteria",
                f"profile {PROFILES[station.criteria.profile]}, with the departures listed "
                "below",
            ),
        )
        if text
    ]
    for name, kind, path in (
        ("Kind of zone", station.zone.kind, "/zone/kind"),
        ("Kind of supply", station.supply.kind, "/supply/kind"),
    ):
        if kind is not None:
            rows.append((name, (dict(fields.entry_for(path).choices)[kind],)))
    made: list[Block] = [Heading("The job and the basis of design"), Facts(tuple(rows))]
    if identity.purpose:
        made.extend(Paragraph((text,)) for text in identity.purpose.split("\n") if text.strip())
    else:
        made.append(Paragraph(("The purpose of the station is not stated.",)))
    made.append(Heading("Method", 3))
    made.append(Items(tuple((line,) for line in METHOD)))
    return tuple(made)
