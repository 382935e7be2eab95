"""The supply figure on sheet 2: what the supply gives, its tests, its limit."""

from server.figures.supply_chart import supply_chart
from server.pages.charts import FigureView, figure_view, no_figure
from server.pages.sheet import SheetView
from server.studies.supply_curve import LEVEL, NoSupplyCurve, supply_curve

TITLE = "What the supply gives"


def supply_figure(sheet: SheetView) -> FigureView:
    """Return the figure for `parts/figure.html`, or what is missing for it.

    Parameters
    ----------
    sheet : SheetView
        The opened sheet.
    """
    curve = supply_curve(sheet.station, sheet.result)
    if isinstance(curve, NoSupplyCurve):
        kinds = {missing.reason for missing in curve.missing}
        if kinds == {LEVEL}:
            return no_figure(
                "supply", TITLE, "A tank gives its level, whatever is drawn: it has no curve."
            )
        first = sheet.field_words(curve.missing[0].path)
        return no_figure(
            "supply", TITLE, f"Drawn as soon as the supply is known; missing first: {first}."
        )
    return figure_view(
        supply_chart(curve, sheet.station, sheet.view), sheet.view, live=False, scale=0.8
    )
