"""The report: what it says, in all three forms, and that no text of a study becomes markup."""

import io
import re
import shutil
import subprocess
from dataclasses import replace
from html.parser import HTMLParser

import pytest
from pptx import Presentation
from pptx.util import Emu

from models.catalog import load_catalog
from models.ownership import EnergyTerms
from models.specification import DesignRules
from optimizer.audit.audited_run import stored_points
from optimizer.certainty.tolerance import sampler
from optimizer.decision import shortlist
from optimizer.errors import InputError
from optimizer.report import report, writing
from optimizer.report.backgrounds import energy_words
from optimizer.report.blocks import unbroken
from optimizer.report.designs import KINDS, components
from optimizer.report.fonts import latin
from optimizer.report.html_writer import html_page
from optimizer.report.naming import quantity_words, told_value
from optimizer.report.pdf_writer import pdf_file
from optimizer.report.pptx_writer import pptx_file
from optimizer.report.sources import model_sources
from optimizer.report.writing import check_libraries, write_report

NASTY = "</script><img onerror=alert(1) src=x>"
NEEDS_POPPLER = pytest.mark.skipif(
    shutil.which("pdftotext") is None, reason="needs pdftotext (poppler-utils)"
)
NEEDS_OFFICE = pytest.mark.skipif(
    shutil.which("soffice") is None or shutil.which("pdftotext") is None,
    reason="needs soffice (libreoffice-impress) and pdftotext (poppler-utils)",
)


@pytest.fixture(scope="module")
def found(stored):
    sampled = sampler(stored.study, stored.table, stored_points(stored))
    return shortlist(stored.study, stored.table, stored.margins, None, sampled)


@pytest.fixture(scope="module")
def content(stored, found):
    return report(stored, found)


@pytest.fixture(scope="module")
def nasty(stored):
    study = replace(stored.study, name=NASTY, description=f"A <b>site</b> & {NASTY}", currency="<i>EUR</i>")
    run = replace(stored, study=study)
    sampled = sampler(study, run.table, stored_points(run))
    return report(run, shortlist(study, run.table, run.margins, None, sampled))


@pytest.fixture(scope="module")
def pdf(content):
    return pdf_file(content)


@pytest.fixture(scope="module")
def slides(content):
    return pptx_file(content)


class Reading(HTMLParser):
    def __init__(self):
        super().__init__()
        self.tags, self.fetched, self.text, self.inside = [], [], [], None

    def handle_starttag(self, tag, attrs):
        self.inside = tag
        self.tags.append(tag)
        self.fetched += [value for name, value in attrs if name in ("src", "href", "srcset")]
        assert not [name for name, _ in attrs if name.startswith("on")]

    def handle_endtag(self, tag):
        self.inside = None

    def handle_data(self, data):
        if self.inside != "style":
            self.text.append(data)


def read(html):
    reading = Reading()
    reading.feed(html)
    return reading, " ".join(" ".join(reading.text).replace("\u00a0", " ").split())


def texts(content):
    """Every text of a report outside its tables of words and its charts."""
    told = [content.title, content.question, *content.recommendation, *content.assumptions, *content.cautions]
    told += [words for _, words in content.gains]
    for table in [content.options, *(table for part in content.sections for table in part.tables)]:
        told += [table.title, *table.columns, *(cell for row in table.rows for cell in row)]
    return told


def test_page_one_says_what_a_decision_needs(content, stored, found):
    assert "5 kVA, single phase, grid-connected" in content.question
    assert f"{stored.summary['evaluations']:,} candidates" in content.question
    design = stored.table.iloc[found.recommended]
    assert design.design_id in content.recommendation[0]
    assert "least price and lost energy" in content.recommendation[1]
    assert "Over 15 years its losses cost" in content.recommendation[1]
    assert len(content.pictures) == 3
    assert any("lethal" in words and "licensed practice" in words for words in content.cautions)
    assert any("Early-concept figures" in words for words in content.cautions)
    assert any("0.20 currency units a kilowatt-hour" in words for words in content.assumptions)
    assert len(content.options.rows) == len(found.rows)
    assert content.options.strong == {found.rows.index(found.recommended)}


def test_no_name_of_the_program_is_told(content):
    for text in texts(content):
        assert not re.search(r"[a-z]{2,}_[a-z]{2,}", text), text
        assert "nan" not in text.split(), text
        assert text != "None"


def test_one_design_is_enough(stored):
    row = stored.table.index[stored.table.overall_front][0]
    run = replace(
        stored, table=stored.table.loc[[row]].reset_index(drop=True), margins=stored.margins.loc[[row]]
    )
    told = report(run, shortlist(run.study, run.table, run.margins))
    assert len(told.options.rows) == 1
    assert told.gains == ()
    assert pdf_file(told).startswith(b"%PDF")
    assert pptx_file(told)
    assert read(html_page(told))[0].tags.count("img") == 3


def test_a_long_description_overflows_nothing(stored):
    study = replace(stored.study, description="A site.\n" * 200)
    run = replace(stored, study=study)
    told = report(run, shortlist(study, run.table, run.margins))
    first = Presentation(io.BytesIO(pptx_file(told))).slides[0]
    assert max(len(shape.text_frame.text) for shape in first.shapes if shape.has_text_frame) < 700
    assert pdf_file(told).startswith(b"%PDF")


@pytest.mark.parametrize(("price", "words"), [(0.2, "0.20 currency"), (0.085, "0.085 currency")])
def test_no_digit_of_the_energy_price_is_lost(stored, price, words):
    spec = replace(stored.study.specification, energy=EnergyTerms(price_per_kwh=price))
    assert words in energy_words(replace(stored.study, specification=spec))


def test_tables_are_whole(content):
    for section in content.sections:
        for table in section.tables:
            assert sum(table.shares) == pytest.approx(1.0, abs=0.01)
            assert len(table.shares) == len(table.columns)
            assert {len(row) for row in table.rows} == {len(table.columns)}


def test_components_add_up_to_the_totals(stored):
    for title, (_, _, total, _) in KINDS.items():
        parts = stored.table[list(components(stored.table, title))].sum(axis=1)
        assert parts.to_numpy() == pytest.approx(stored.table[total].to_numpy(), rel=1e-5), title


def test_every_design_rule_is_listed_and_a_changed_one_is_marked(stored, content):
    rules = next(table for part in content.sections for table in part.tables if table.title == "Design rules")
    assert len(rules.rows) == len(DesignRules.__dataclass_fields__)
    assert {row[2] for row in rules.rows} == {""}
    changed = replace(stored.study.specification, rules=DesignRules(junction_margin=25.0))
    run = replace(stored, study=replace(stored.study, specification=changed))
    told = report(run, shortlist(run.study, run.table, run.margins))
    rules = next(table for part in told.sections for table in part.tables if table.title == "Design rules")
    assert [row[1:] for row in rules.rows if row[2]] == [("25 K", "set by the study")]


def test_values_of_the_parts_used_come_with_their_origins(stored, found, content):
    tables = next(part for part in content.sections if part.title == "Values of the parts used").tables
    designs = stored.table.iloc[found.rows]
    named = {table.title.split(": ", 1)[1] for table in tables}
    assert set(designs.device) | set(designs.dc_link) | set(designs.inverter_inductor_core) <= named
    device = load_catalog([]).devices[0]
    assert device.origin
    told = [row for table in tables for row in table.rows]
    assert sum(bool(row[3]) for row in told) > 0.8 * len(told)


def test_models_are_listed_with_sources():
    told = dict(model_sources())
    assert any("Dowell" in source for source in told.values())
    assert any("Short, Packey, Holt (1995)" in source for source in told.values())
    assert any("Bar-Cohen & Rohsenow" in source for source in told.values())
    assert len(told) > 25
    assert not any("\n" in text or "`" in text for pair in told.items() for text in pair)


def test_html_fetches_nothing_and_says_all(content):
    reading, text = read(html_page(content))
    assert all(value.startswith("data:image/svg+xml;base64,") for value in reading.fetched)
    assert len(reading.fetched) == 3
    assert "script" not in reading.tags
    for words in texts(content):
        assert " ".join(words.split()) in text


def test_words_of_a_study_stay_words_in_html(nasty, content):
    html = html_page(nasty)
    reading, text = read(html)
    assert NASTY in text
    assert "<i>EUR</i>" in text
    assert reading.tags.count("img") == 3
    assert len(reading.tags) == len(read(html_page(content))[0].tags)


def pdf_text(data, tmp_path, *options):
    (tmp_path / "report.pdf").write_bytes(data)
    done = subprocess.run(
        ["pdftotext", "-layout", *options, tmp_path / "report.pdf", "-"],
        capture_output=True,
        text=True,
        check=True,
    )
    return done.stdout.replace("\u00a0", " ")


@NEEDS_POPPLER
def test_the_pdf_has_its_decision_on_page_one_and_the_appendix_behind(pdf, content, tmp_path):
    pages = pdf_text(pdf, tmp_path).split("\f")
    first = " ".join(pages[0].split())
    assert "Appendix" not in first
    assert f"Recommended: {content.recommendation[0]}" in first
    assert "licensed practice decide" in first
    assert "a standard is." in first, "the last words of the cautions"
    assert pages[1].lstrip().startswith("Appendix for engineers")
    everything = " ".join(" ".join(pages).split())
    for section in content.sections:
        assert section.title in everything


@NEEDS_POPPLER
def test_words_of_a_study_stay_words_in_pdf(nasty, tmp_path):
    text = " ".join(pdf_text(pdf_file(nasty), tmp_path, "-l", "1").split())
    assert NASTY in text
    assert "A <b>site</b> &" in text


def test_the_same_run_gives_the_same_pdf(pdf, content):
    assert pdf_file(content) == pdf


def test_slides_have_native_tables_and_charts_as_pictures(slides, content):
    show = Presentation(io.BytesIO(slides))
    first = show.slides[0]
    tables = [shape.table for shape in first.shapes if shape.has_table]
    assert len(tables) == 1
    assert tables[0].cell(1, 1).text == content.options.rows[0][1]
    pictures = [shape for slide in show.slides for shape in slide.shapes if shape.shape_type == 13]
    assert len(pictures) == 3
    assert all(shape._element.nvPicPr.cNvPr.get("descr") for shape in pictures)
    cells = {
        cell.text.replace("\u00a0", " ").strip()
        for slide in show.slides
        for shape in slide.shapes
        if shape.has_table
        for row in shape.table.rows
        for cell in row.cells
    }
    for section in content.sections:
        if section.on_slides:
            assert {cell.strip() for table in section.tables for row in table.rows for cell in row} <= cells


def test_nothing_stands_off_the_slides(slides):
    show = Presentation(io.BytesIO(slides))
    for slide in show.slides:
        for shape in slide.shapes:
            assert shape.left >= 0
            assert shape.top >= 0
            assert shape.left + shape.width <= show.slide_width + Emu(9525)
            assert shape.top + shape.height <= show.slide_height + Emu(9525)


@NEEDS_OFFICE
def test_slides_drawn_by_an_office_program_hold_all_their_text(slides, content, tmp_path):
    (tmp_path / "report.pptx").write_bytes(slides)
    command = ["soffice", "--headless", f"-env:UserInstallation=file://{tmp_path}/profile"]
    command += ["--convert-to", "pdf", "--outdir", str(tmp_path), str(tmp_path / "report.pptx")]
    subprocess.run(command, capture_output=True, check=True, timeout=120)
    pages = pdf_text((tmp_path / "report.pdf").read_bytes(), tmp_path).split("\f")
    assert len(pages) - 1 == len(Presentation(io.BytesIO(slides)).slides)
    assert "a standard is." in " ".join(pages[0].split())


def test_a_missing_library_is_told_before_anything_is_written(content, tmp_path, monkeypatch):
    monkeypatch.setattr(writing, "find_spec", lambda name: None)
    with pytest.raises(InputError) as caught:
        write_report(content, tmp_path / "out", ["html", "pdf", "pptx"])
    assert str(caught.value).splitlines() == [
        "--format pdf: given no library reportlab on this machine, expected it installed: "
        "pip install 'wattfront[report]'",
        "--format pptx: given no library python-pptx on this machine, expected it installed: "
        "pip install 'wattfront[report]'",
    ]
    assert not (tmp_path / "out").exists()
    check_libraries(["html"])


def test_files_are_written_where_asked_for(content, tmp_path):
    assert write_report(content, tmp_path / "new" / "out", ["html", "html"]) == [
        tmp_path / "new/out/report.html"
    ]
    assert [path.name for path in (tmp_path / "new" / "out").iterdir()] == ["report.html"]
    with pytest.raises(InputError, match="given a file, expected a folder"):
        write_report(content, tmp_path / "new" / "out" / "report.html", ["html"])


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("strand_diameter_m", ("strand diameter", "mm", 1e3)),
        ("junction_limit_c", ("junction limit", "°C", 1.0)),
        ("gate_charge_c_per_m2", ("gate charge", "nC/mm²", 1e3)),
        ("price_fixed", ("price fixed", "", 1.0)),
    ],
)
def test_names_become_words_and_units(name, words):
    assert quantity_words(name) == words


def test_every_value_of_the_catalogue_has_words():
    catalog = load_catalog([])
    for kind in (
        "devices",
        "core_materials",
        "core_shapes",
        "conductors",
        "dc_link_capacitors",
        "ac_capacitors",
    ):
        for name in getattr(catalog, kind)[0].__dataclass_fields__:
            words, _, factor = quantity_words(name)
            assert "_" not in words
            assert factor > 0.0


@pytest.mark.parametrize(
    ("value", "text"),
    [(0.38, "0.38"), (5e-05, "5e-05"), (12345.6, "12,350"), (True, "yes"), ((1.5, 2.0), "1.5, 2"),
     (float("inf"), "-"), ("litz", "litz")],
)  # fmt: skip
def test_values_are_told_with_four_digits(value, text):
    assert told_value(value, 1.0) == text


def test_figures_stay_with_their_units():
    assert (
        unbroken("0.75 l (25 %) at 20.9 kHz, 5 points")
        == "0.75\u00a0l (25\u00a0%) at 20.9\u00a0kHz, 5 points"
    )


def test_letters_that_the_built_in_fonts_lack_become_their_nearest():
    assert latin("Müller, 5 Ω, Łódź 太") == "Müller, 5 ohm, ?ódz ?"


def test_what_limits_the_fronts_is_told_by_concept_and_octave(stored, content):
    section = next(one for one in content.sections if one.title == "What limits the fronts")
    (table,) = section.tables
    bands = stored.binding[["concept", "from [kHz]"]].drop_duplicates()
    assert len(table.rows) == len(bands)
    first = stored.binding.iloc[0]
    assert table.rows[0][3].startswith(f"{first['limit']} ({first['designs at it [%]']:.0f} %)")


def test_the_report_tells_how_sure_figures_are_and_what_they_hang_on(found, content):
    titles = [one.title for one in content.sections]
    assert "How sure the figures are" in titles
    own = found.table["design_id"].iloc[found.recommended]
    assert f"What the figures of {own} hang on" in titles
    bands, holding, drivers = content.sections[titles.index("How sure the figures are")].tables
    assert len(bands.columns) == len(drivers.columns) == len(found.rows) + 1
    assert holding.rows[-1][0] == "all limits together"


def test_a_run_without_that_table_has_a_report_without_it(stored):
    older = replace(stored, binding=None)
    titles = [one.title for one in report(older, shortlist(older.study, older.table, older.margins)).sections]
    assert "What limits the fronts" not in titles
    assert "How sure the figures are" not in titles  # nothing was sampled
