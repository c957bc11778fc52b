"""Species, zones, animals and sessions as written: what is repaired, what is proposed, what is out of sight."""

import pytest

from niche.logs.labels import key, listing, propose, tidy


@pytest.mark.parametrize(
    "written",
    [
        " mussel bed", "mussel bed ", "mussel  bed", "Mussel Bed", "MUSSEL BED", "mussel\u00a0bed", "\u00a0mussel bed",
        "mussel\tbed", "mussel\nbed", "ｍussel bed", "mussel\u2003bed", "\u3000mussel bed\u2028", "muſſel bed",
    ],
)  # fmt: skip
def test_a_zone_that_differs_by_case_spaces_or_letter_form_is_repaired_and_told(field, written):
    log = field.read([field.bout(zone=written)])
    assert log.visits["zone"].tolist() == ["mussel bed"]
    assert field.entries(log) == [(2, "zone", written, "spelling", "repaired")]
    assert field.problem(log, 2) == "read as 'mussel bed'"
    assert field.rows(log) == {"used": 1}


def test_a_species_is_repaired_likewise(field):
    log = field.read([field.bout(species=" Redshank"), field.bout(species="DUNLIN")])
    assert log.visits["species"].tolist() == ["redshank", "dunlin"]
    assert [entry[3:] for entry in field.entries(log)] == [("spelling", "repaired")] * 2


def test_accents_agree_however_they_are_composed(field):
    log = field.read([field.bout(species="bécasseau")], species=["be\u0301casseau"])
    assert len(log.visits) == 1
    assert field.rows(log) == {"used": 1}


@pytest.mark.parametrize(
    ("written", "proposed"),
    [
        ("mudd", "mud"),
        ("musel bed", "mussel bed"),
        ("mussel-bed", "mussel bed"),
        ("snad", "sand"),
        ("mu\u200bd", "mud"),
    ],
)
def test_a_close_zone_is_proposed_and_never_applied(field, written, proposed):
    log = field.read([field.bout(zone=written)])
    assert field.rows(log) == {"stop": 1}
    problem = field.problem(log, 2)
    assert problem.startswith(f"no such zone; did you mean '{proposed}'?")
    assert "accept the name under `logs.aliases.zones`" in problem
    assert problem.endswith(f'= "{proposed}"')


def test_a_look_alike_letter_is_not_taken_for_the_right_one(field):
    log = field.read([field.bout(zone="s\u0430nd")])
    assert field.rows(log) == {"stop": 1}
    assert "did you mean 'sand'?" in field.problem(log, 2)


def test_a_close_species_is_proposed_and_a_distant_one_is_told_what_is_listed(field):
    log = field.read([field.bout(species="dunlyn"), field.bout(species="knot")])
    problem = field.problem(log, 2)
    assert problem.startswith("not listed under `species`; did you mean 'dunlin'?")
    assert problem.endswith('"dunlyn" = "dunlin"')
    assert field.problem(log, 3).startswith("not listed under `species`; listed are: dunlin, redshank. Mend the log")


def test_an_out_of_sight_label_can_be_proposed_as_well(field):
    log = field.read([field.bout(zone="out of sihgt")])
    assert field.problem(log, 2).startswith("no such zone; did you mean 'out of sight'?")


def test_a_long_list_is_cut_short():
    names = listing(f"stretch of shore {i}" for i in range(40))
    words = propose("xyz", names)
    assert words.startswith("listed are: stretch of shore 0, ")
    assert words.endswith("...")
    assert len(words) < 180


@pytest.mark.parametrize("written", ["out of sight", "not seen", " Out  of\u00a0SIGHT "])
def test_a_declared_label_is_out_of_sight(field, written):
    log = field.read([field.bout(zone=written), field.bout("08:10", "08:15")])
    assert field.rows(log) == {"used": 1, "out_of_sight": 1}
    assert log.visits["zone"].tolist() == ["", "mud"]
    assert log.ledger.milliseconds == {"used": 300_000, "out_of_sight": 600_000}
    repaired = [] if written in ("out of sight", "not seen") else [(2, "zone", written, "spelling", "repaired")]
    assert field.entries(log) == repaired


@pytest.mark.parametrize("written", ["", " ", "\u00a0\t"])
def test_a_blank_zone_is_out_of_sight_and_flagged(field, written):
    log = field.read([field.bout(zone=written)])
    assert field.rows(log) == {"out_of_sight": 1}
    assert field.entries(log) == [(2, "zone", written, "zone blank", "flagged")]
    assert "out of sight" in field.problem(log, 2)


def test_without_declared_labels_out_of_sight_is_an_unknown_zone(field):
    log = field.read([field.bout(zone="not visible")])
    assert field.rows(log) == {"stop": 1}


def test_animals_and_sessions_take_any_name_with_spaces_tidied(field):
    rows = [
        field.bout(animal=" R/W\u00a0 GY ", session="3 Sept,  am"),
        field.bout("09:00", "09:05", animal="NA", session="None"),
    ]
    log = field.read(rows)
    assert log.visits["animal"].tolist() == ["R/W GY", "NA"]
    assert log.visits["session"].tolist() == ["3 Sept, am", "None"]
    assert field.entries(log) == [
        (2, "animal", " R/W\u00a0 GY ", "spelling", "repaired"),
        (2, "session", "3 Sept,  am", "spelling", "repaired"),
    ]


@pytest.mark.parametrize("name", ["NA", "nan", "null", "0", "-", "=1+1", "1e5", "001"])
def test_names_that_look_like_something_else_stay_names(field, name):
    log = field.read([field.bout(animal=name, species=name)], species=[])
    assert log.visits["animal"].tolist() == log.visits["species"].tolist() == [name]


def test_an_animal_called_none_is_no_animal_unless_the_study_says_so(field):
    assert field.rows(field.read([field.bout(animal="None")])) == {"stop": 1}
    assert field.rows(field.read([field.bout(animal="None")], logs="nameless = []")) == {"used": 1}


def test_without_listed_species_each_name_is_taken_with_spaces_tidied(field):
    log = field.read(
        [field.bout(species=" turnstone "), field.bout(species="knot"), field.bout(species="")], species=[]
    )
    assert log.visits["species"].tolist() == ["turnstone", "knot"]
    assert field.rows(log) == {"used": 2, "set_aside": 1}


@pytest.mark.parametrize(
    ("text", "tidied", "shared"),
    [
        ("  A  b ", "A b", "a b"),
        ("\u00a0Ａ\u00a0", "A", "a"),
        ("Straße", "Straße", "strasse"),
        ("", "", ""),
        (" \n", "", ""),
    ],
)
def test_tidy_keeps_the_case_and_key_does_not(text, tidied, shared):
    assert (tidy(text), key(text)) == (tidied, shared)
