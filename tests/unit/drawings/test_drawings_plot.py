"""The plot as a document: what it says, where its texts stand, and that its curves are the responses."""

from __future__ import annotations

import math
import xml.etree.ElementTree as ET
from itertools import combinations, pairwise

import pytest

from bandwright.drawings import areas, curves, panels
from bandwright.drawings.plot import MOST_BYTES, layout, plot
from bandwright.drawings.responses import of_coefficients, responses
from bandwright.forecast.forecast import Forecast
from bandwright.theory.closed_form import response
from unit.drawings.drawn import NAMES, drawn, elements, forecasts, text_boxes

DEMO_NAMES = ("strain-slow", "mains-hum", "brake-squeal", "brake-rumble", "gearbox-envelope", "slew-rate")


@pytest.mark.parametrize("name", NAMES)
def test_it_is_one_short_document_without_scripts_links_or_dashes(name: str) -> None:
    svg = drawn(name)
    ET.fromstring(svg)
    assert len(svg.encode()) <= MOST_BYTES
    assert svg.count("http") == 1  # the name space
    for word in ("<script", "href", "@import", "dasharray", "<image", "foreignObject", "nan", "inf,"):
        assert word not in svg


@pytest.mark.parametrize("name", NAMES)
def test_it_is_the_same_for_the_same_filter(name: str) -> None:
    again = Forecast(forecasts()[name].filter, {})
    assert plot(again) == drawn(name)


@pytest.mark.parametrize("name", NAMES)
def test_no_text_lies_on_another_one_or_outside(name: str) -> None:
    svg = drawn(name)
    root, boxes = ET.fromstring(svg), text_boxes(svg)
    assert len(boxes) == len(elements(svg, "text"))
    width, height = float(root.attrib["width"]), float(root.attrib["height"])
    for words, box in boxes.items():
        assert box.left >= 0.0 and box.right <= width and box.top >= 0.0 and box.bottom <= height, words
    for (one, box), (other, other_box) in combinations(boxes.items(), 2):
        assert not box.overlaps(other_box), f"{one} / {other}"


@pytest.mark.parametrize("name", NAMES)
def test_every_forbidden_area_is_in_both_panels_unless_it_is_beyond_their_gains(name: str) -> None:
    forecast = forecasts()[name]
    assert forecast.mask is not None
    placed = layout(forecast, forecast.mask, ())
    for area in areas.areas(forecast.mask):
        box = panels.area_box(placed.whole, area)
        assert box is not None
        left, top, right, bottom = placed.whole.box
        assert left <= box.left < box.right <= right
        assert top <= box.top < box.bottom <= bottom
        edge = box.bottom if area.over else box.top
        assert placed.whole.level.value(edge) == pytest.approx(area.level, abs=1e-9)
        assert top < edge < bottom
    assert svg_limits(drawn(name)) == sum(
        panels.area_box(panel, area) is not None
        for panel in (placed.enlarged, placed.whole)
        for area in areas.areas(forecast.mask)
    )


def svg_limits(svg: str) -> int:
    return sum(one.attrib["class"] == "limit" for one in elements(svg, "rect"))


@pytest.mark.parametrize("name", DEMO_NAMES)
def test_every_point_of_a_curve_is_the_gain_at_its_frequency(name: str) -> None:
    forecast = forecasts()[name]
    assert forecast.mask is not None
    shown = responses(forecast)
    placed = layout(forecast, forecast.mask, shown)
    lines = [one.attrib for one in elements(drawn(name), "polyline") if "curve" in one.attrib["class"]]
    for one in shown:
        design = forecast.design(next(c for c in forecast.candidates if c.family == one.family))
        assert design is not None
        points = [
            tuple(map(float, pair.split(",")))
            for line in lines
            if line["class"].split()[1] == one.family
            for pair in line["points"].split()
        ]
        assert len(points) > 25
        for x, y in points:
            panel = placed.whole if y > placed.enlarged.box.bottom + 1.0 else placed.enlarged
            # Coordinates have one decimal, so the true curve passes within 0.05 pixels on either side.
            drawn_at = (panel.frequency.value(x + dx) for dx in (-0.051, 0.0, 0.051))
            ys = [panel.level.px(max(response.gain_db(design, w), -1e4)) for w in drawn_at]
            assert min(ys) - 0.06 <= y <= max(ys) + 0.06


@pytest.mark.parametrize("name", DEMO_NAMES)
def test_a_curve_is_nowhere_far_from_its_polyline(name: str) -> None:
    """Looked at ten times as densely as it is sampled, a third of a pixel off at most."""
    forecast = forecasts()[name]
    assert forecast.mask is not None
    shown = responses(forecast)
    placed = layout(forecast, forecast.mask, shown)
    panel = placed.whole
    for one in shown:
        for run in curves.polylines(one.gain_db, one.knots, panel.frequency, panel.level):
            for before, after in pairwise(run):
                steep = max(1.0, abs(after.y - before.y) / (after.x - before.x))
                for part in (0.2, 0.4, 0.6, 0.8):
                    x = before.x + part * (after.x - before.x)
                    line_y = before.y + part * (after.y - before.y)
                    true_y = panel.level.px(one.gain_db(panel.frequency.value(x)))
                    assert abs(true_y - line_y) <= 0.6 * steep


@pytest.mark.parametrize("name", NAMES)
def test_no_response_enters_a_forbidden_area(name: str) -> None:
    """The reference designs meet their masks, so their curves do where the mask is drawn rightly."""
    forecast = forecasts()[name]
    assert forecast.mask is not None
    for one in responses(forecast):
        for area in areas.areas(forecast.mask):
            inner = [w for w in one.knots if area.low < w < area.high]
            for w in (area.low, area.high, *inner):
                beyond = (one.gain_db(w) - area.level) * (1.0 if area.over else -1.0)
                assert beyond <= 1e-6, (one.label, area, w)


def test_the_candidates_that_the_keys_admit_are_drawn_and_one_more_beside_a_single_family() -> None:
    families = {name: [one.family for one in responses(forecasts()[name])] for name in DEMO_NAMES}
    assert families["strain-slow"] == ["elliptic", "chebyshev-1"]
    assert families["mains-hum"] == ["butterworth", "elliptic"]
    assert families["gearbox-envelope"] == []  # linear phase: FIR only
    assert [one.family for one in responses(forecasts()["strain-anti-alias"])] == ["elliptic", "chebyshev-2"]
    assert len(responses(forecasts()["narrow"])) == 4


@pytest.mark.parametrize("name", NAMES)
def test_each_curve_has_its_label_and_each_order_its_edge(name: str) -> None:
    words = {text.text for text in elements(drawn(name), "text")}
    shown = responses(forecasts()[name])
    assert {one.label for one in shown} <= words
    setting = [text for text in words if text and "sets" in text]
    assert bool(setting) == bool(shown)


def test_edges_are_named_by_band_and_frequency_as_they_are_written() -> None:
    words = {text.text for text in elements(drawn("mains-hum"), "text")}
    assert {"pass to 40 Hz", "stop from 49 Hz", "stop to 51 Hz, sets the order", "pass from 62 Hz"} <= words


def test_the_axis_is_in_hertz_and_in_parts_of_pi_without_a_rate() -> None:
    assert "Frequency, Hz" in {text.text for text in elements(drawn("strain-slow"), "text")}
    normalised = {text.text for text in elements(drawn("slew-rate"), "text")}
    assert "Frequency, pi rad/sample" in normalised
    assert not [text for text in normalised if text and "Hz" in text]


def test_it_says_in_words_what_it_shows() -> None:
    svg = drawn("strain-slow")
    root = ET.fromstring(svg)
    assert [child.tag.partition("}")[2] for child in root][:2] == ["title", "desc"]
    assert root.attrib["role"] == "img"
    assert root[0].text == "strain-slow: Low-pass, 20 Hz to 25.6 Hz at 4 kHz"
    spoken = root[1].text or ""
    for words in (
        "Pass to 20 Hz: at least \N{MINUS SIGN}0.1 dB and at most 0 dB.",
        "Stop from 25.6 Hz: at most \N{MINUS SIGN}70 dB.",
        "elliptic order 8, which the forecast chooses; its order is set by stop from 25.6 Hz.",
    ):
        assert words in spoken


def test_what_is_not_drawn_is_told() -> None:
    assert "Not drawn: the FIR responses, equiripple and kaiser-window." in " ".join(
        text.text or "" for text in elements(drawn("gearbox-envelope"), "text")
    )


def test_a_response_that_is_handed_in_is_drawn() -> None:
    """Three taps 1/4, 1/2, 1/4: cos(w/2)^2, so 1 at 0 and 1/2 at pi/2 (worked by hand)."""
    own = of_coefficients("equiripple", [0.25, 0.5, 0.25])
    assert own.gain_db(0.0) == pytest.approx(0.0, abs=1e-12)
    assert own.gain_db(0.5 * math.pi) == pytest.approx(-20.0 * math.log10(2.0))
    svg = plot(forecasts()["gearbox-envelope"], (own,))
    assert "equiripple, 3 taps" in {text.text for text in elements(svg, "text")}
    assert "the FIR responses, kaiser-window" in svg


def test_four_taps_have_their_delays_between_the_samples() -> None:
    """Taps 1/8, 3/8, 3/8, 1/8: the amplitude is cos(w/2)^3 (worked by hand)."""
    own = of_coefficients("equiripple", [0.125, 0.375, 0.375, 0.125], -1.0)
    assert own.gain_db(1.0) == pytest.approx(60.0 * math.log10(math.cos(0.5)) + 1.0)


def test_without_a_mask_there_is_no_plot() -> None:
    forecast = forecasts()["strain-slow"]
    unread = Forecast(forecast.filter, {})
    unread.mask = None
    with pytest.raises(ValueError, match="strain-slow makes no mask"):
        plot(unread)
