"""What the solve says: verdict, peak, parts with their margins, where the heat leaves, warnings, caution."""

from __future__ import annotations

from typing import Any

from solver.document import Results, SourceResult

from ..compare import part_differences
from ..desk import Desk
from ..refs import Ref
from ..sheet import Sheet
from .controls import verdict
from .figures import celsius, kelvin, limit_point, number, residual, uncertainty, watts
from .help import CAUTION
from .html import Html, join, tag
from .pane import Pane

OUTLETS = {"west": "West edge", "east": "East edge", "south": "South edge", "north": "North edge",
           "top": "Top face",
           "bottom": "Bottom face"}
LEAST_SHARE = 5e-7
"""An outlet that takes a smaller share of the heat is left out of the list."""


class VerdictPane(Pane):
    desk_watched = ("active", "difference")
    sheet_watched = ("solution", "state", "selection", "trouble", "revision")

    def draw(self, desk: Desk) -> Html:
        sheet = desk.sheets[desk.active]
        if sheet.solution is None:
            words = sheet.trouble if sheet.state == "failed" else "The first solve is under way."
            return tag("section", tag("h2", "Verdict"), tag("p", words, class_="break pre"), class_="results")
        results = sheet.solution.results
        stale = sheet.state in ("solving", "failed")
        return tag("section", _headline(sheet, results, desk), _parts(sheet, results),
                   self._differences(desk),
                   _balance(results), _warnings(results), class_="results" + (" stale" if stale else ""),
                   data_name="results", data_verdict=results.verdict, data_state=sheet.state,
                   data_of=f"{sheet.key}{sheet.revision}")

    def _differences(self, desk: Desk) -> Html | None:
        if "B" not in desk.sheets:
            return None
        a, b = desk.sheets["A"].solution, desk.sheets["B"].solution
        if a is None or b is None:
            return None
        return _difference_table(a.results, b.results, desk.difference)

    def do_select(self, arg: Any, _: Any) -> None:
        self.desk.select(self.desk.active, [Ref("source", arg)])

    def do_difference(self, _: Any, on: Any) -> None:
        self.desk.difference = bool(on)


def _headline(sheet: Sheet, results: Results, desk: Desk) -> Html:
    peak, limits = results.peak, results.layout.limits
    title = f"Sheet {desk.active}" if "B" in desk.sheets else "Verdict"
    bar = (uncertainty(peak.grid_uncertainty_k) if peak.grid_uncertainty_k is not None
           else "(draft: error not known yet)")
    return tag("div",
               tag("div", tag("h2", title, class_="grow"), verdict(results.verdict, _overall(results)),
                   class_="row", data_name="verdict"),
               tag("p", "Of the layout before; see the line at the bottom.", class_="small stale-words")
               if sheet.state in ("solving", "failed") else None,
               tag("div", tag("span", celsius(peak.temperature_c), class_="figure", data_name="peak",
                              data_value=f"{peak.temperature_c:.6f}"),
                   tag("span", tag("b", f"peak {bar}"),
                       f" at x {number(peak.x_mm)} mm, y {number(peak.y_mm)} mm in {peak.layer}",
                       class_="small break"), class_="row"),
               tag("p", _plate_words(results, limits), class_="small break"),
               tag("p", tag("b", "Caution. "), CAUTION, class_="caution"),
               class_=f"headline {results.verdict}")


def _overall(results: Results) -> str | None:
    over = sum(part.verdict == "fail" for part in results.sources)
    close = sum(part.verdict == "warn" for part in results.sources)
    if results.verdict == "fail" and over:
        return f"{over} {'part' if over == 1 else 'parts'} over the limit"
    if results.verdict == "warn" and close:
        return f"{close} {'part' if close == 1 else 'parts'} close to the limit"
    return None


def _plate_words(results: Results, limits: Any) -> Html:
    if limits.plate_c is None:
        return join(verdict("no-limits", "Plate: no limit set"))
    margin = limits.plate_c - results.peak.temperature_c
    if margin < 0:
        return join(verdict("fail", f"Plate {kelvin(-margin)} over"),
                    f" its limit of {celsius(limits.plate_c)}")
    kind = "warn" if margin < limits.warn_margin_k else "pass"
    words = "Plate close to its limit" if kind == "warn" else "Plate within its limit"
    return join(verdict(kind, words), f" of {celsius(limits.plate_c)}, {kelvin(margin)} below")


def _parts(sheet: Sheet, results: Results) -> Html:
    sources = {source.id: source for source in results.layout.sources}
    chosen = {ref.id for ref in sheet.selection if ref.kind == "source"}
    rows = [_part(sources[part.id], part, part.id in chosen) for part in results.sources]
    head = tag("tr", tag("th", "Part"), tag("th", "Heat", class_="num"),
               tag("th", "Temp.", class_="num", title="Temperature at the point its limit holds for"),
               tag("th", "Margin", class_="num"))
    return tag("section", tag("h2", "Parts"),
               tag("table", tag("thead", head), *rows, class_="parts") if rows else
               tag("p", "No heat sources yet.", class_="soft small"))


def _part(source: Any, part: SourceResult, chosen: bool) -> Html:
    point, value = limit_point(source, part)
    margin = "" if part.margin_k is None else kelvin(part.margin_k, signed=True)
    known = [("junction", part.junction_c), ("case", part.case_c), ("footprint", part.max_c),
             ("footprint mean", part.mean_c)]
    others = [f"{name} {celsius(figure)}" for name, figure in known if figure is not None and name != point]
    limit = f"at its {point}, " + ("no limit" if part.limit_c is None else f"limit {celsius(part.limit_c)}")
    return tag("tbody",
               tag("tr",
                   tag("td",
                       tag("button", verdict(part.verdict, part.id), type="button", class_="plain part-name",
                           data_act="select", data_arg=part.id, title=f"Select {part.id}",
                           data_name=f"part-{part.id}")),
                   tag("td", watts(part.power_w), class_="num"),
                   tag("td", celsius(value), class_="num"),
                   tag("td", margin or "–", class_="num")),
               tag("tr", tag("td", f"{limit}; {', '.join(others)}", colspan=4, class_="small soft")),
               class_="chosen" if chosen else None, data_key=part.id)


def _difference_table(a: Results, b: Results, mapped: bool) -> Html:
    rows = [tag("tr", tag("td", "Peak of the plate"), tag("td", celsius(a.peak.temperature_c), class_="num"),
                tag("td", celsius(b.peak.temperature_c), class_="num"),
                tag("td", kelvin(b.peak.temperature_c - a.peak.temperature_c, signed=True), class_="num"))]
    for row in part_differences(a, b):
        one = None if row.a is None else _judged(row.a, a)
        two = None if row.b is None else _judged(row.b, b)
        rows.append(tag("tr",
                        tag("td", row.id,
                            tag("span", f" {row.where}", class_="soft small") if row.where != "both"
                            else None,
                            class_="break"),
                        tag("td", "–" if one is None else celsius(one), class_="num"),
                        tag("td", "–" if two is None else celsius(two), class_="num"),
                        tag("td", "–" if None in (one, two) else kelvin(two - one, signed=True),
                            class_="num")))
    return tag("section", tag("div", tag("h2", "Differences, part by part", class_="grow"),
                              tag("label",
                                  tag("input", type="checkbox", checked=mapped, data_act="difference",
                                      data_name="difference-map"), "map", class_="choice small"),
                              class_="row"),
               tag("table",
                   tag("thead", tag("tr", tag("th", "At the limit point"), tag("th", "A", class_="num"),
                                    tag("th", "B", class_="num"),
                                    tag("th", "B \u2212 A", class_="num"))),
                   tag("tbody", rows), class_="parts differences"), data_name="differences")


def _judged(part: SourceResult, results: Results) -> float:
    source = next(source for source in results.layout.sources if source.id == part.id)
    return limit_point(source, part)[1]


def _balance(results: Results) -> Html:
    balance = results.heat_balance
    inflow = balance.sources_w - sum(min(w, 0.0) for w in balance.out_w.values())
    whole = max(inflow, 1e-12)
    shown = [(name, w) for name, w in balance.out_w.items() if abs(w) > LEAST_SHARE * whole]
    rows = [tag("tr", tag("td", _outlet(name), class_="break"), tag("td", _bar(w / whole)),
                tag("td", watts(w), class_="num"), tag("td", f"{number(100 * w / whole)} %", class_="num"),
                data_key=name)
            for name, w in sorted(shown, key=lambda item: -item[1])]
    rows.append(tag("tr", tag("td", "Not accounted for", class_="soft", colspan=2),
                    tag("td", residual(balance.residual_w), class_="num soft", colspan=2), data_key="rest"))
    return tag("section", tag("h2", f"Where the {watts(balance.sources_w)} of the sources leave"),
               tag("table", tag("tbody", rows), class_="balance"), data_name="balance")


def _outlet(name: str) -> str:
    return OUTLETS.get(name, f"Contact {name.removeprefix('contact:')}")


def _bar(share: float) -> Html:
    width = max(min(abs(share), 1.0) * 100, 0.5)
    return tag("span", tag("span", style=f"width:{width:.1f}%", class_="in" if share < 0 else None),
               class_="share")


def _warnings(results: Results) -> Html | None:
    if not results.warnings:
        return None
    return tag("section", tag("h2", "Warnings"),
               tag("ul", [tag("li", tag("i", "▲", aria_hidden="true"), " ", warning.message,
                              tag("span", f" ({warning.where})", class_="soft small"), class_="break")
                          for warning in results.warnings], class_="warnings"), data_name="warnings")
