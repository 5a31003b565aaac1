"""Plain-text tables and paragraphs: columns that line up, by hand."""

from retrofit.report.text_table import Column, paragraph, text_table, width


def test_numbers_stand_right_and_words_left():
    """Heading, unit and cells of a column share one edge; the rule is as wide as the table."""
    columns = [Column("Name", "", is_words=True), Column("COP"), Column("Power", "kW")]

    assert text_table(columns, [["R1", "3.1", "12.5"], ["R1234yf", "12", "7"]]).split("\n") == [
        "Name      COP  Power",
        "                  kW",
        "────────────────────",
        "R-1       3.1   12.5",
        "R-1234yf   12      7",
    ]


def test_without_units_there_is_no_unit_line():
    """A table of words has one line of heading, and an empty one only its heading."""
    columns = [Column("A", is_words=True), Column("B", is_words=True)]

    assert text_table(columns, [["x", "y"]]).split("\n") == ["A  B", "────", "x  y"]
    assert text_table(columns, []).split("\n") == ["A  B", "────"]


def test_width_counts_cells_of_a_terminal():
    """A combining accent takes none, a wide character two (Unicode standard annex 11)."""
    assert [width(text) for text in ("abc", "e\u0301", "−5", "冷媒", "")] == [3, 1, 2, 4, 0]


def test_wide_characters_keep_the_columns():
    """The second column begins at the same cell under wide characters."""
    lines = text_table([Column("A", is_words=True), Column("B")], [["冷媒", "1"], ["ab", "2"]]).split("\n")

    assert lines[-2:] == ["冷媒  1", "ab    2"]


def test_paragraphs_wrap_to_the_columns_with_their_indents():
    """The first line and those after it have indents of their own, and no line is longer than asked for."""
    text = paragraph("one two three four five six seven", 16, indent="    ", first="- ")

    assert text.split("\n") == ["- one two three", "    four five", "    six seven"]


def test_a_long_word_is_not_broken():
    """A name stays whole where it is longer than the line."""
    assert paragraph("a R1234ze(E)-and-so-on", 6).split("\n")[-1].endswith("so-on")
