"""The ledger as people read it."""

from click.testing import CliRunner
from report_cases import SOURCES, wells_of

from logkit.cli.why import command as why
from logkit.report.ledger_view import ledger_headings, ledger_lines
from logkit.report.wells import Well
from logkit.report.wording import Units
from logkit.words import digits


def test_lines_round_the_numbers_of_the_ledger(small: Well) -> None:
    """Each line shows the velocity alone, the narrowing and the gain of its row, and cites by author and year."""
    rows = small.history.ledger_at(0)
    lines = ledger_lines(rows, Units())
    assert len(lines) == len(rows) > 1
    state = next(line for line in lines if line.criterion == "bed state of the structure")
    row = next(row for row in rows if row.criterion == "bed_state")
    assert state.alone == f"{digits(row.alone_p10_m_s)}–{digits(row.alone_p90_m_s)}"
    assert state.narrows == f"{row.narrows:.1f}"
    assert state.gain == f"{row.gain_bits:.2f}"
    assert state.source.startswith("van Rijn 1984; van den Berg & van Gelder 1993")
    assert "2 mm" in state.validity
    assert len(state.cells) == len(ledger_headings(Units()))


def test_feet_turn_the_velocities(small: Well) -> None:
    """The same ledger in feet has the velocities over 0.3048."""
    row = next(row for row in small.history.ledger_at(0) if row.criterion == "bed_state")
    line = ledger_lines([row], Units(True))[0]
    assert line.alone == f"{digits(row.alone_p10_m_s / 0.3048)}–{digits(row.alone_p90_m_s / 0.3048)}"


def test_one_sided_criteria_are_said_so() -> None:
    """A criterion that only bounds from below or above says which."""
    found = {
        (row.bound, line.alone.split("\u00a0")[0])
        for well in wells_of("river")
        for place in range(len(well.history.estimates))
        for row, line in zip(
            well.history.ledger_at(place), ledger_lines(well.history.ledger_at(place), Units()), strict=True
        )
        if row.bound != "band"
    }
    assert found == {("above", "above"), ("below", "below")}


def test_every_phase_with_a_ledger_is_in_exactly_one() -> None:
    """Phases that read alike share a ledger; none is lost, none is in two, and the numbers are their own."""
    for well in wells_of("river"):
        ledgers = well.ledgers(Units())
        places = [place for ledger in ledgers for place in ledger.places]
        having = [p for p in range(len(well.history.estimates)) if well.history.ledger_at(p)]
        assert sorted(places) == having
        assert len(ledgers) < len(having)
        for ledger in ledgers:
            for place in ledger.places:
                assert ledger_lines(well.history.ledger_at(place), Units()) == ledger.lines


def test_phases_are_named_from_one(small: Well) -> None:
    """Words for phases count them from 1 at the base and leave the number away where there is one."""
    assert small.places_words([0, 1, 2]) == "Beds 1, 2 <b> (phases 1 and 2)"
    assert small.places_words([2]) == "Bed 2 <b> (phase 2)"


def test_why_prints_the_same_lines() -> None:
    """`logkit why` prints the lines of the report, phase by phase, and the tested ranges under them."""
    text = CliRunner().invoke(why, [str(SOURCES["river"]), "--bed", "5", "--quiet"]).stdout
    history = wells_of("river")[0].history
    places = history.places_of("5")
    assert len(places) == 2
    for place in places:
        for line in ledger_lines(history.ledger_at(place), Units()):
            assert "\t".join(line.cells) in text
            assert f"  {line.criterion}: {line.validity}" in text
    second = CliRunner().invoke(why, [str(SOURCES["river"]), "--bed", "5", "--phase", "2", "--quiet"]).stdout
    assert second.count("criterion\tsays") == 1
