"""Facts about the PDF machinery: same bytes, text that can be found again, vectors only, nothing that raises.

Every number checked here is stated by the test itself (pages, widths in points, counts); none is a physical
reference value, so no published source applies.
"""

from __future__ import annotations

import hashlib
import io
import os
import re
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from matplotlib.figure import Figure
from matplotlib.path import Path as Outline
from pypdf import PdfReader
from reportlab.platypus import Spacer

from pdf_texts import page_texts
from quillshaft.present.pdf.document import (
    FigureFlowable,
    PageFrame,
    SignatureRow,
    build_pdf,
    bullets,
    captioned,
    caution_box,
    data_table,
    heading,
    key_values,
    note,
    paragraph,
    signature_block,
    stamp,
    verbatim,
)
from quillshaft.present.pdf.figure import write_figure_pdf
from quillshaft.present.pdf.fonts import SANS, text_width_pt
from quillshaft.present.pdf.hatch import hatch_lines, hatch_marks
from quillshaft.present.pdf.renderer import plain_label, trace_segments
from quillshaft.present.pdf.style import TEXT_WIDTH_PT
from quillshaft.present.pdf.text import fitted

SYMBOLS = "θ ω² kg·m² → ≤"
FRAME = PageFrame(
    document="TA-0417",
    revision="2",
    status="checked",
    title="Torsional analysis: raw-water booster",
    date="2026-11-30",
    caution="Local codes and licensed practice come first.",
    author="A. Lindqvist",
)
HOSTILE = {
    "long-word": "w" * 1000,
    "markup": "<b>5 < 6 & 7 > 2</i> &amp; <para> ]]> \"'",
    "controls": "bell \x07 null \x00 escape \x1b form \x0c tab \t next \x85 end",
    "emoji": "ship \N{SHIP} family \N{MAN}\u200d\N{WOMAN} flag \U0001f1eb\U0001f1ee \ufe0f",
    "right-to-left": "\u05e9\u05dc\u05d5\u05dd \u0645\u0631\u062d\u0628\u0627 \u202eabc\u202c",
    "surrogate": "lone \ud800 half",
    "combining": "θ" + "\u0308" * 60,
    "many-lines": "\n" * 300 + "end",
    "long-text": "word and word " * 600,
    "empty": "",
    "cjk": "水泵" * 300,
    "dollars": r"cost $5 to $6 and \frac $x^{",
}


def rich_figure() -> Figure:
    figure = Figure(figsize=(TEXT_WIDTH_PT / 72, 3.5))
    axes = figure.add_subplot()
    speed = np.linspace(10.0, 2000.0, 400)
    axes.set_xscale("log")
    axes.plot(speed, 1.0 + np.sin(speed / 60.0), color="black", label="Torque, kN·m")
    axes.plot(speed, speed / 900.0, "--", marker="o", markevery=50, label="order 2 line")
    axes.axvspan(80.0, 140.0, facecolor="0.9", edgecolor="black", hatch="//", alpha=0.6, label="barred range")
    axes.fill_between(speed, 0.0, 0.4, facecolor="none", edgecolor="0.3", hatch="..")
    axes.set_ylim(0.0, 1.5)
    axes.set_xlabel(f"Speed {SYMBOLS}")
    axes.set_ylabel("Amplitude Ω of the coupling")
    axes.text(20.0, 1.2, f"slanted {SYMBOLS}", rotation=30)
    axes.legend(loc="lower right")
    return figure


def sample_story() -> list:
    rows = [[f"motor-hub {order}x", f"{order}", f"{1000 + 13.7 * order:.1f}"] for order in range(80)]
    return [
        stamp("Pass with restriction", "restriction", "Margin 4.2 % of 10 % required."),
        heading("Results"),
        paragraph(f"Symbols: {SYMBOLS}."),
        heading("Interferences", 2),
        data_table(["Source name", "Mode", "Critical speed"], rows, align="lrr", bold_rows=[1]),
        heading("Charts"),
        captioned(FigureFlowable(rich_figure(), bookmark_alt="Torque over speed"), "Figure 1. Torque."),
        heading("Input"),
        verbatim("\n".join(f"line-{number} = {number}" for number in range(90))),
        signature_block([SignatureRow("Prepared", "A. Lindqvist", "2026-11-30"), SignatureRow("Approved")]),
    ]


def figure_bytes(figure: Figure, title: str = "chart") -> bytes:
    stream = io.BytesIO()
    write_figure_pdf(figure, stream, title)
    return stream.getvalue()


def digest() -> str:
    return hashlib.sha256(build_pdf(sample_story(), FRAME) + figure_bytes(rich_figure())).hexdigest()


def read(pdf: bytes) -> PdfReader:
    return PdfReader(io.BytesIO(pdf), strict=True)


def texts(pdf: bytes) -> list[str]:
    return page_texts(pdf)


def drawing(pdf: bytes, page: int = 0) -> str:
    return read(pdf).pages[page].get_contents().get_data().decode("latin-1")


@pytest.fixture(scope="module")
def sample() -> bytes:
    return build_pdf(sample_story(), FRAME)


def test_bytes_do_not_depend_on_hash_seed_or_time_zone_or_earlier_calls() -> None:
    here = [str(folder) for folder in Path(__file__).parents[:2]]
    program = f"import sys; sys.path[:0] = {here!r}; import {Path(__file__).stem} as t; print(t.digest())"
    found = set()
    for seed, zone in (("77", "America/Lima"),):
        environment = {**os.environ, "PYTHONHASHSEED": seed, "TZ": zone, "PYTHONDONTWRITEBYTECODE": "1"}
        run = subprocess.run(
            [sys.executable, "-c", program], env=environment, capture_output=True, text=True, check=True
        )
        found.add(run.stdout.strip())
    found |= {digest(), digest()}
    assert len(found) == 1


def test_symbols_come_back_as_text(sample: bytes) -> None:
    assert f"Symbols: {SYMBOLS}." in texts(sample)[0]


def test_rotated_text_comes_back_in_one_piece() -> None:
    found = texts(figure_bytes(rich_figure()))[0]
    assert f"slanted {SYMBOLS}" in found
    assert "Amplitude Ω of the coupling" in found


def test_figures_in_a_report_keep_their_text(sample: bytes) -> None:
    assert f"Speed {SYMBOLS}" in "".join(texts(sample))


def test_no_raster_image_is_in_the_file(sample: bytes) -> None:
    for pdf in (sample, figure_bytes(rich_figure())):
        reader = read(pdf)
        objects = [reader.get_object(number) for number in range(1, len(reader.xref[0]))]
        streams = [item for item in objects if hasattr(item, "get_data")]
        assert len(streams) > 1
        assert all(stream.get("/Subtype") != "/Image" for stream in streams)
        assert not any(re.search(r"\bBI\b", drawing(pdf, page)) for page in range(len(reader.pages)))


def test_every_font_is_embedded(sample: bytes) -> None:
    fonts = read(sample).pages[0]["/Resources"]["/Font"]
    assert len(fonts) >= 4
    for font in fonts.values():
        assert "/FontFile2" in font["/FontDescriptor"]


def test_pages_are_numbered_n_of_m(sample: bytes) -> None:
    pages = texts(sample)
    assert len(pages) >= 4
    for number, text in enumerate(pages, start=1):
        assert re.findall(r"Page (\d+) of (\d+)", text) == [(str(number), str(len(pages)))]


def test_header_and_caution_stand_on_every_page(sample: bytes) -> None:
    for text in texts(sample):
        for wanted in ("TA-0417", "Revision 2", "2026-11-30", "CHECKED", FRAME.title, FRAME.caution):
            assert wanted in text


def test_outline_holds_the_headings_and_the_figure_at_their_pages(sample: bytes) -> None:
    reader = read(sample)
    results, below_results, charts, below_charts, last = reader.outline
    assert [entry.title for entry in (results, charts, last)] == ["Results", "Charts", "Input"]
    assert [entry.title for entry in below_results] == ["Interferences"]
    assert [entry.title for entry in below_charts] == ["Torque over speed"]
    for entry in (results, *below_results, charts, last):
        page = reader.pages[reader.get_destination_page_number(entry)]
        assert entry.title in page.extract_text()


def test_outline_accepts_headings_that_skip_a_level() -> None:
    reader = read(build_pdf([heading("Deep", 3), heading("Top", 1), heading("Deep again", 3)], FRAME))
    first, second, below = reader.outline
    assert [first.title, second.title, below[0].title] == ["Deep", "Top", "Deep again"]


def test_metadata_come_from_the_frame() -> None:
    reader = read(build_pdf([paragraph("text")], FRAME))
    assert reader.metadata.title == FRAME.title
    assert reader.metadata.author == FRAME.author
    assert reader.metadata["/CreationDate"] == "D:20261130000000Z"
    assert reader.metadata["/ModDate"] == "D:20261130000000Z"


def test_undated_document_carries_no_clock_time() -> None:
    undated = PageFrame("TA-1", "0", "issued", "Undated", "")
    assert read(build_pdf([paragraph("text")], undated)).metadata["/CreationDate"].startswith("D:20000101")


def test_only_a_draft_carries_the_diagonal_mark() -> None:
    turned = {}
    for status in ("draft", "checked", "issued"):
        frame = PageFrame("TA-1", "0", status, "Title", "2026-11-30")
        pdf = build_pdf([paragraph("text")], frame)
        turned[status] = ".587785 .809017" in drawing(pdf)  # cosine and sine of 54 degrees
        assert texts(pdf)[0].count(status.upper()) == 1
    assert turned == {"draft": True, "checked": False, "issued": False}


def test_letter_and_a4_pages_have_their_sizes() -> None:
    for size, (width, height) in {"A4": (595.28, 841.89), "letter": (612.0, 792.0)}.items():
        frame = PageFrame("TA-1", "0", "issued", "Title", "2026-11-30", page_size=size)
        box = read(build_pdf([paragraph("text")], frame)).pages[0].mediabox
        assert float(box.width) == pytest.approx(width, abs=0.01)
        assert float(box.height) == pytest.approx(height, abs=0.01)


def test_table_head_repeats_on_every_page_of_the_table() -> None:
    rows = [[f"motor-hub {order}x", str(order)] for order in range(150)]
    pages = texts(build_pdf([data_table(["Source name", "Mode"], rows)], FRAME))
    assert len(pages) >= 3
    assert all(text.count("Source name") == 1 for text in pages)
    assert re.findall(r"motor-hub (\d+)x", "".join(pages)) == [str(order) for order in range(150)]


def test_row_taller_than_a_page_runs_on_and_loses_nothing() -> None:
    long = " ".join(f"w{number};" for number in range(4000))
    pages = texts(build_pdf([data_table(["Key", "Note"], [["a", long], ["b", "short"]], [1, 2])], FRAME))
    assert len(pages) > 3
    assert re.findall(r"w(\d+);", "".join(pages)) == [str(number) for number in range(4000)]
    assert "short" in pages[-1]


@pytest.mark.parametrize("text", HOSTILE.values(), ids=HOSTILE.keys())
def test_hostile_text_builds_in_every_block(text: str) -> None:
    figure = Figure(figsize=(4, 2))
    figure.text(0.1, 0.5, text[:60])
    story = [
        heading(text[:5000]),
        heading(text, 2),
        paragraph(text),
        note(text),
        bullets([text, "second"]),
        key_values([(text, text), ("label", text)]),
        data_table([text, "B", "C"], [[text, text, "1"], ["x", "y", text]]),
        data_table([text, "B"], [[text, "1"]], column_widths=[1, 60]),
        caution_box(text, text),
        *(stamp(text, tone, text) for tone in ("pass", "restriction", "fail")),
        captioned(FigureFlowable(figure, bookmark_alt=text), text),
        verbatim(text),
        signature_block([SignatureRow(text, text, text)]),
        paragraph("the last words"),
    ]
    frame = PageFrame(text, text, "draft", text, text, author=text, caution=text[:600], page_size="letter")
    pdf = build_pdf(story, frame)
    assert "the last words" in texts(pdf)[-1]
    assert len(read(pdf).pages) == len(texts(pdf))


def test_markup_in_text_is_shown_not_obeyed() -> None:
    text = "<b>5 < 6 & 7 > 2</i> &amp; <para>"
    found = texts(build_pdf([paragraph(text), data_table(["A"], [[text]])], FRAME))[0]
    assert found.count(text) == 2


def test_characters_without_glyph_become_squares_in_prose_and_codes_in_files() -> None:
    found = texts(build_pdf([paragraph("pump 水泵."), verbatim("name = 水\x07\u202e\ttab")], FRAME))[0]
    assert "pump □□." in found
    assert "name = <U+6C34><U+0007><U+202E>" in found


def test_verbatim_numbers_lines_and_marks_wrapped_ones() -> None:
    text = "short\n" + "x" * 250 + "\r\n\tindented\n\nlast\n"
    pages = texts(build_pdf([verbatim(text)], FRAME))
    assert len(pages) == 1
    assert pages[0].count("x") - FRAME.title.count("x") >= 250
    assert pages[0].count("↪") == 2
    assert pages[0].endswith(" 3 indented 4 5 last")


@pytest.mark.parametrize("filler_pt", [0, 400, 560, 600, 640, 680])
def test_heading_stands_on_the_page_of_what_follows(filler_pt: int) -> None:
    followers = {
        "CAPTION": lambda: captioned(FigureFlowable(rich_figure()), "CAPTION"),
        "CELL": lambda: data_table(["HEAD"], [["CELL"]] * 60),
    }
    for word, follower in followers.items():
        story = [Spacer(1, filler_pt), heading("Upper heading"), heading("Lower heading", 2), follower()]
        pages = texts(build_pdf(story, FRAME))
        (home,) = (text for text in pages if "Upper heading" in text)
        assert "Lower heading" in home
        assert word in home


def test_long_text_is_cut_to_the_width_with_an_ellipsis() -> None:
    line = fitted("Torsional analysis of a train " * 20, SANS, 8.0, 200.0)
    assert line.endswith("…")
    assert 190.0 < text_width_pt(line, SANS, 8.0) <= 200.0
    assert fitted("short\ttext", SANS, 8.0, 200.0) == "short text"


def test_figure_with_hatch_clip_dashes_log_axis_and_legend_draws_them() -> None:
    pdf = figure_bytes(rich_figure())
    code, text = drawing(pdf), texts(pdf)[0]
    assert {"10¹", "10²", "10³"} <= set(text.split())
    assert "barred range" in text
    assert re.search(r"\[5\.55 2\.4\] 0(\.0)? d", code)
    assert len(re.findall(r"\bW\*? n", code)) >= 6  # two lines, band and area, and both hatches
    states = read(pdf).pages[0]["/Resources"]["/ExtGState"]
    assert any(state.get("/ca") == pytest.approx(0.6, abs=1e-9) for state in states.values())


def test_hatch_is_drawn_with_thin_lines() -> None:
    figure = Figure(figsize=(2, 2))
    figure.add_axes((0, 0, 1, 1)).axvspan(0.2, 0.8, facecolor="none", edgecolor="black", hatch="x", lw=2)
    code = drawing(figure_bytes(figure))
    widths = [float(width) for width in re.findall(r"([\d.]+) w\b", code)]
    assert 0.5 in widths
    assert 1.0 not in widths


def test_hatch_lines_are_distinct_and_evenly_spaced() -> None:
    for pattern, spacing in (("/", 13.0), ("///", 13.0 / 3), ("-", 13.0), ("||", 6.5)):
        lines = np.array(hatch_lines(pattern, (10.0, 20.0, 150.0, 90.0)))
        start, along = lines[:, :2], (lines[:, 2:] - lines[:, :2])
        along /= np.linalg.norm(along, axis=1, keepdims=True)
        offset = np.sort(along[:, 0] * start[:, 1] - along[:, 1] * start[:, 0])
        np.testing.assert_allclose(np.diff(offset), spacing, atol=1e-9)
        assert len(lines) > 3


def test_hatch_marks_cover_the_box() -> None:
    marks = hatch_marks(".o", (0.0, 0.0, 100.0, 50.0))
    assert {mark.filled for mark in marks} == {True, False}
    assert max(mark.x_pt for mark in marks) >= 100.0
    assert max(mark.y_pt for mark in marks) >= 50.0


def test_line_is_drawn_where_the_data_put_it() -> None:
    figure = Figure(figsize=(2, 1))
    axes = figure.add_axes((0, 0, 1, 1), xlim=(0, 10), ylim=(0, 10), frame_on=False)
    axes.set_axis_off()
    axes.plot([1.0, 5.0, 9.0], [2.0, 7.5, 5.0])
    assert re.search(r"14\.4 14\.4 m\s+72 54 l\s+129\.6 36 l", drawing(figure_bytes(figure)))


def test_quadratic_curve_is_drawn_as_the_equal_cubic() -> None:
    class Recorder:
        def moveTo(self, *xy: float) -> None:  # noqa: N802
            self.points = [xy]

        def curveTo(self, *xy: float) -> None:  # noqa: N802
            self.points += [xy[:2], xy[2:4], xy[4:]]

    recorder = Recorder()
    curve = Outline([(0, 0), (30, 60), (90, 0)], [Outline.MOVETO, Outline.CURVE3, Outline.CURVE3])
    trace_segments(recorder, list(curve.iter_segments()))
    p0, p1, p2, p3 = np.array(recorder.points)
    np.testing.assert_allclose((p0 + 3 * p1 + 3 * p2 + p3) / 8, (37.5, 30.0), atol=1e-9)


def test_power_labels_become_superscripts_and_other_text_stays() -> None:
    assert plain_label(r"$\mathdefault{10^{-3}}$") == "10⁻³"
    assert plain_label(r"$\mathdefault{2\times10^{4}}$") == "2·10⁴"
    assert plain_label("$x$") == "$x$"


def test_drawing_leaves_the_figure_as_it_was() -> None:
    figure = rich_figure()
    before = (figure.dpi, figure.canvas, tuple(figure.get_size_inches()))
    first = figure_bytes(figure)
    assert (figure.dpi, figure.canvas, tuple(figure.get_size_inches())) == before
    assert figure_bytes(figure) == first


def test_constrained_layout_and_colour_fields_draw_as_vectors() -> None:
    figure = Figure(figsize=(5, 3), layout="constrained")
    axes = figure.add_subplot()
    field = axes.pcolormesh(np.arange(25.0).reshape(5, 5), cmap="Greys")
    figure.colorbar(field, ax=axes, label="Temperature °C")
    assert "Temperature °C" in texts(figure_bytes(figure))[0]


def test_images_are_refused_by_name() -> None:
    figure = Figure()
    figure.add_subplot().imshow(np.eye(4))
    with pytest.raises(NotImplementedError, match="pcolormesh"):
        figure_bytes(figure)


def test_figure_file_is_written_whole(tmp_path: Path) -> None:
    write_figure_pdf(rich_figure(), tmp_path / "chart.pdf", "Response of the coupling")
    assert [file.name for file in tmp_path.iterdir()] == ["chart.pdf"]
    assert PdfReader(tmp_path / "chart.pdf").metadata.title == "Response of the coupling"


def test_figure_is_scaled_to_the_width_asked_and_to_the_page() -> None:
    wide = Figure(figsize=(20, 4))
    assert FigureFlowable(wide).wrap(TEXT_WIDTH_PT, 600) == pytest.approx((459.0, 91.8), abs=1e-9)
    assert FigureFlowable(wide, width=230).wrap(TEXT_WIDTH_PT, 600) == pytest.approx((230.0, 46.0), abs=1e-9)
    tall = FigureFlowable(Figure(figsize=(5, 30)))
    assert tall.wrap(TEXT_WIDTH_PT, 700)[1] == pytest.approx(600.0, abs=1e-9)


@pytest.mark.parametrize(
    ("wrong", "message"),
    [
        (lambda: PageFrame("d", "0", "final", "t", ""), "'final'"),
        (lambda: PageFrame("d", "0", "draft", "t", "", page_size="A3"), "'A3'"),
        (lambda: PageFrame("d", "0", "draft", "t", "", caution="x" * 601), "601"),
        (lambda: heading("h", 4), "level 4"),
        (lambda: stamp("s", "maybe"), "'maybe'"),
        (lambda: data_table([], []), "without columns"),
        (lambda: data_table(["A", "B"], [["1"]]), "row 0 has 1 cells"),
        (lambda: data_table(["A"], [["1"]], align="q"), "'q'"),
        (lambda: data_table(["A"], [["1"]], column_widths=[0.0]), "positive shares"),
    ],
)
def test_wrong_arguments_are_named(wrong, message: str) -> None:
    with pytest.raises(ValueError, match=re.escape(message)):
        wrong()
