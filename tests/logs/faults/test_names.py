"""Names: what is repaired, what is proposed, what is accepted by alias, what a spreadsheet has mangled."""

from __future__ import annotations

import pytest

from niche.errors import StudyError
from niche.logs.characters import hidden, holding, look_alikes
from niche.logs.mangled import is_date, is_rounded_id, short_ids
from niche.logs.visits.alike import one_slip


@pytest.mark.parametrize("written", ["upper mudd", "uper mud", "upper-mud", "uppr mud"])
def test_a_close_zone_is_proposed_with_the_line_that_accepts_it_and_never_applied(flat, written):
    log = flat.read([flat.bout("08:00", "08:01:30", zone=written)])
    assert flat.told(log) == [("a.csv", 2, "zone", "unknown zone", "stop")]
    assert flat.problem(log, 2) == (
        "no such zone; did you mean 'upper mud'? Mend the log, or accept the name under `logs.aliases.zones`: "
        f'"{written}" = "upper mud"'
    )


def test_an_alias_is_applied_and_noted(flat):
    tables = '[logs.aliases.zones]\n"Upper  MUDD" = "upper mud"\n"n.v." = "out of sight"\n'
    tables += '[logs.aliases.species]\nrednose = "redshank"\n[logs.aliases.animals]\nRWW = "RW"'
    lines = [
        flat.bout("08:00", "08:01:30", zone="upper mudd", species="RedNose", animal="rww"),
        flat.bout("08:10", "08:11:30", zone="N.V."),
    ]
    log = flat.read(lines, tables=tables)
    assert flat.told(log) == [
        ("a.csv", 2, "species", "alias", "repaired"),
        ("a.csv", 2, "animal", "alias", "repaired"),
        ("a.csv", 2, "zone", "alias", "repaired"),
        ("a.csv", 3, "zone", "alias", "repaired"),
    ]
    assert log.visits[["species", "animal", "zone"]].to_numpy().tolist() == [
        ["redshank", "RW", "upper mud"],
        ["dunlin", "RW", ""],
    ]
    assert flat.problem(log, 3) == "read as 'out of sight', by logs.aliases.zones"
    log.require_usable()


@pytest.mark.parametrize(
    ("table", "line", "words"),
    [
        ("zones", 'mudd = "upper muddd"', ["logs.aliases.zones.'mudd'", "'upper muddd'", "not a zone of the layout"]),
        ("zones", '"Upper MUD" = "upper sand"', ["is itself a zone of the layout"]),
        ("zones", '"out of sight" = "upper sand"', ["is itself a zone"]),
        ("zones", '" " = "upper sand"', ["an alias needs letters"]),
        ("zones", 'mudd = "upper mud"\nMUDD = "upper sand"', ["the same spelling", "'upper mud' as well"]),
        ("species", 'dun = "dunlinn"', ["logs.aliases.species.'dun'", "not listed under `species`", "dunlin, redshank"]),
        ("species", 'dunlin = "redshank"', ["is itself listed"]),
        ("animals", 'RW = "rw"', ["leads to itself"]),
        ("animals", 'RWW = "RW"\nRW = "WR"', ["leads to 'RW', which is an alias too"]),
    ],
)  # fmt: skip
def test_an_alias_that_cannot_hold_is_refused_with_its_key(flat, table, line, words):
    with pytest.raises(StudyError) as error:
        flat.study(flat.base, tables=f"[logs.aliases.{table}]\n{line}")
    assert all(word in str(error.value) for word in words), str(error.value)


def test_an_animal_may_be_renamed_by_alias_to_any_name_with_another_case(flat):
    flat.study(flat.base, tables='[logs.aliases.animals]\nWR = "RW"\n"R W" = "RW"')


def test_a_look_alike_letter_in_a_zone_is_named_by_its_code_point(flat):
    log = flat.read([flat.bout("08:00", "08:01:30", zone="l\u043ewer mud")])
    assert flat.told(log) == [("a.csv", 2, "zone", "unknown zone", "stop")]
    problem = flat.problem(log, 2)
    assert "did you mean 'lower mud'? It holds U+043E CYRILLIC SMALL LETTER O." in problem
    assert '"l\\u043Ewer mud" = "lower mud"' in problem


@pytest.mark.parametrize(
    ("written", "named"),
    [
        ("upper\u200b mud", "U+200B ZERO WIDTH SPACE"),
        ("\ufeffupper mud", "U+FEFF ZERO WIDTH NO-BREAK SPACE"),
        ("upper \u2018mud\u2019", "U+2018 LEFT SINGLE QUOTATION MARK, U+2019 RIGHT SINGLE QUOTATION MARK"),
        ("upper\u2013mud", "U+2013 EN DASH"),
        ("upp\u0435r mud", "U+0435 CYRILLIC SMALL LETTER IE"),
        ("\u03c5pper mud", "U+03C5 GREEK SMALL LETTER UPSILON"),
    ],
)
def test_what_cannot_be_seen_in_an_unknown_zone_is_named(flat, written, named):
    log = flat.read([flat.bout("08:00", "08:01:30"), flat.bout("08:10", "08:11:30", zone=written)])
    assert f"It holds {named}" in flat.problem(log, 3)


def test_spaces_of_every_kind_are_repaired(flat):
    log = flat.read(
        [flat.bout("08:00", "08:01:30", zone="\u00a0upper\u2003mud ", animal=" R\u00a0W", session="s1\u00a0")]
    )
    assert flat.told(log) == [("a.csv", 2, name, "spelling", "repaired") for name in ("animal", "session", "zone")]
    assert log.visits[["animal", "session", "zone"]].to_numpy().tolist() == [["R W", "s1", "upper mud"]]


def test_a_look_alike_letter_in_an_animal_is_flagged_and_kept(flat):
    log = flat.read(
        [flat.bout("08:00", "08:01:30", animal="R\u0410W"), flat.bout("08:10", "08:11:30", animal="G\u200dY")]
    )
    assert flat.told(log) == [
        ("a.csv", 2, "animal", "look-alike letter", "flagged"),
        ("a.csv", 3, "animal", "hidden character", "flagged"),
    ]
    assert flat.problem(log, 2) == "holds U+0410 CYRILLIC CAPITAL LETTER A; one animal spelled two ways counts as two"
    assert "U+200D ZERO WIDTH JOINER" in flat.problem(log, 3)


@pytest.mark.parametrize("text", ["RW", "Großer Priel", "Кулик", "μm 5", "R-Б", "ΑΒ", "5 µm", "bécasseau", ""])
def test_honest_letters_are_not_flagged(text):
    assert look_alikes(text) == []
    assert hidden(text) == []


def test_many_odd_characters_are_named_in_part():
    assert holding("\u0430\u0435\u043e\u0440") == (
        "holds U+0430 CYRILLIC SMALL LETTER A, U+0435 CYRILLIC SMALL LETTER IE, U+043E CYRILLIC SMALL LETTER O and 1 more"
    )


def test_an_unknown_species_is_asked_about_and_its_scientific_name_is_known(flat):
    log = flat.read(
        [flat.bout("08:00", "08:01:30", species="Pelidna alpina"), flat.bout("08:10", "08:11:30", species="dunlyn")]
    )
    assert "say under `logs.aliases.species` which name it stands for" in flat.problem(log, 2)
    assert '"dunlyn" = "dunlin"' in flat.problem(log, 3)
    study = '[[species]]\nname = "sanderling"\nscientific_name = "Calidris alba"'
    log = flat.read([flat.bout("08:00", "08:01:30", species="calidris ALBA")], zones=f"{study}")
    assert log.visits["species"].tolist() == ["sanderling"]
    assert flat.problem(log, 2) == "read as 'sanderling', whose scientific name it is"


@pytest.mark.parametrize("policy", ["stop", "set_aside"])
@pytest.mark.parametrize("written", ["UNK", " unk", "?", "None", "unidentified"])
def test_an_animal_without_a_name_is_no_animal(flat, written, policy):
    log = flat.read([flat.bout("08:00", "08:01:30", animal=written)], problems=f'nameless_animals = "{policy}"')
    assert ("a.csv", 2, "animal", "nameless animal", policy) in flat.told(log)
    problem = flat.problem(log, 2, reason="nameless")
    assert '`logs.problems.nameless_animals` to "set_aside"' in problem
    assert '`analysis.unit` to "session"' in problem
    assert not len(log.visits)


def test_animals_without_names_may_be_anywhere_where_the_session_is_the_unit(flat):
    rows = [
        flat.bout("08:00", "08:10:30", animal="unk"),
        flat.bout("08:05", "08:15:30", animal="unk", zone="lower mud"),
    ]
    log = flat.read(rows, analysis='unit = "session"')
    assert [entry[3:] for entry in flat.told(log)] == [("nameless animal", "flagged")] * 2
    assert log.ledger.rows["used"] == 2
    log = flat.read([r.replace("unk", "visitor") for r in rows], logs='nameless = ["visitor"]')
    assert log.ledger.rows["stop"] == 2


@pytest.mark.parametrize("written", ["9.0E+14", "9E+14", "9,00E+14", "9.85120012345e+14"])
@pytest.mark.parametrize("name", ["animal", "session"])
def test_an_id_in_exponent_form_stops_the_work(flat, written, name):
    log = flat.read([flat.bout("08:00", "08:01:30", **{name: f'"{written}"'})])
    assert flat.told(log) == [("a.csv", 2, name, "id turned into a number", "stop")]
    assert "last digits are lost" in flat.problem(log, 2)
    assert "column set to text" in flat.problem(log, 2)
    tables = f'[logs.aliases.animals]\n"{written}" = "RW"'
    if name == "animal":
        log = flat.read([flat.bout("08:00", "08:01:30", animal=f'"{written}"')], tables=tables)
        assert log.visits["animal"].tolist() == ["RW"]


@pytest.mark.parametrize("text", ["9E14", "E+14", "A9E+14", "900000000000000", "1e5", "", "9E+1444"])
def test_other_ids_are_let_through(text):
    assert not is_rounded_id(text)


@pytest.mark.parametrize(
    "written",
    ["1-Feb", "01-Feb-26", "1. Feb", "Feb-01", "Feb 2026", "2026-02-01", "2026-02-01T00:00:00", "2026-02-01 00:00",
     "01/02/2026", "1.2.26", "2-Okt", "3 March"],
)  # fmt: skip
@pytest.mark.parametrize("policy", ["stop", "set_aside"])
def test_a_zone_turned_into_a_date_stops_the_work_whatever_the_policy(flat, written, policy):
    log = flat.read([flat.bout("08:00", "08:01:30", zone=written)], problems=f'unknown_zone = "{policy}"')
    assert flat.told(log) == [("a.csv", 2, "zone", "zone turned into a date", "stop")]
    assert "a spreadsheet has turned a zone name into a date" in flat.problem(log, 2)
    log = flat.read(
        [flat.bout("08:00", "08:01:30", zone=written)], tables=f'[logs.aliases.zones]\n"{written}" = "upper mud"'
    )
    assert log.visits["zone"].tolist() == ["upper mud"]


@pytest.mark.parametrize(
    "text", ["1-2", "upper mud", "march", "may sand", "decking 1", "set 1", "out 2", "A-Feb", "12", "1/2", "10:30", ""]
)
def test_other_zones_are_no_dates(text):
    assert not is_date(text)


def watched(flat, *animals):
    return [
        flat.bout(f"{8 + n // 60:02d}:{n % 60:02d}", f"{8 + n // 60:02d}:{n % 60:02d}:30", animal=animal)
        for n, animal in enumerate(animals)
    ]


@pytest.mark.parametrize("slip", ["RWBB", "RWB", "RWBYY", "WRBY", "RWYB", "rwby", "RW-BY"])
def test_a_rare_animal_name_close_to_a_common_one_is_proposed(flat, slip):
    log = flat.read(watched(flat, *["RWBY"] * 10, slip, *["GO"] * 10))
    assert flat.told(log) == [("a.csv", 12, "animal", "names nearly alike", "flagged")]
    problem = flat.problem(log, 12)
    assert problem.startswith("stands once, and 'RWBY' 10 times")
    assert f'`logs.aliases.animals`: "{slip}" = "RWBY"' in problem
    assert set(log.visits["animal"]) == {"RWBY", "GO", slip}


@pytest.mark.parametrize(
    "animals",
    [["RWBY"] * 10 + ["RWGG"], ["A1"] * 10 + ["A2"], ["RWBY"] * 10 + ["RWBB"] * 3,
     ["RWBY"] * 9 + ["RWBB"], ["RW"] * 10 + ["GY"]],
)  # fmt: skip
def test_animals_that_may_well_be_two_are_left_alone(flat, animals):
    assert flat.told(flat.read(watched(flat, *animals))) == []


def test_names_that_differ_in_case_alone_are_asked_about_however_many(flat):
    log = flat.read(watched(flat, *["RWBY"] * 4, *["rwby"] * 3))
    assert [entry[3] for entry in flat.told(log)] == ["names nearly alike"]


def test_species_without_a_list_are_looked_at_likewise(flat):
    log = flat.read(
        [*watched(flat, *["RW"] * 10), flat.bout("12:00", "12:00:30", species="dunlinn", animal="GO")], species=""
    )
    assert ("a.csv", 12, "species", "names nearly alike", "flagged") in flat.told(log)


def test_ids_that_may_have_lost_zeros_are_flagged(flat):
    log = flat.read(watched(flat, "00123456", "123456", "10234567", "20345678", "34567", "30456789"))
    found = {entry[1]: entry[3:] for entry in flat.told(log)}
    assert found == {3: ("zeros in front may be lost", "flagged"), 6: ("zeros in front may be lost", "flagged")}
    assert '"123456" = "00123456"' in flat.problem(log, 3)


def test_numbers_given_out_in_turn_are_no_short_ids():
    assert short_ids([str(n) for n in range(200)]) == {}
    assert short_ids(["1234", "12345", "123"]) == {}
    assert short_ids(["10000001", "10000002", "1000003"]) == {"1000003": None}


@pytest.mark.parametrize(
    ("a", "b", "slip"),
    [("ab", "ab", False), ("ab", "ba", True), ("abc", "ab", True), ("abc", "axc", True), ("abc", "xyc", False),
     ("a1", "a2", False),
     ("98512001", "98512007", True), ("abcd", "badc", False), ("", "a", True), ("a", "abc", False), ("ab1", "ab", False)],
)  # fmt: skip
def test_one_slip(a, b, slip):
    assert one_slip(a, b) is slip
    assert one_slip(b, a) is slip
