"""Every published figure against what the program gives, and every example used or saying why not."""

import pytest
from examples import FOLDER, REGISTERED, coverage, example, examples, records


@pytest.mark.parametrize("record", [pytest.param(item, id=f"{item.example.id} {item.quantity}") for item in records()])
def test_published_figure(record):
    """Within the print, or within the tolerance stated beside the figure; one said to depart must depart."""
    assert record.holds, f"{record.ours!r} for {record.printed.value!r}, {record.kind} {record.tolerance}"


def test_no_tolerance_is_wider_than_the_print_without_a_reason():
    for record in records():
        if record.kind == "within print":
            assert record.tolerance == record.printed.precision
        else:
            assert len(record.why.split()) >= 3, record.quantity


@pytest.mark.parametrize("identity", sorted(examples()))
def test_every_figure_is_checked_or_says_why_not(identity):
    reasons = coverage()["not_checked"]
    if identity in reasons:
        assert identity not in REGISTERED
        return
    computed = {record.quantity.split(", ")[0] for record in records() if record.example.id == identity}
    assert computed, f"{identity} is not checked"
    for name in example(identity).printed:
        assert (name in computed) != (f"{identity} {name}" in reasons), name


def test_reasons_are_words_about_figures_of_this_folder():
    for place, reason in coverage()["not_checked"].items():
        identity, _, name = place.partition(" ")
        assert len(reason.split()) >= 5
        assert not name or name in example(identity).printed


def test_what_waits_for_later_work_is_not_here():
    later = [identity for ids in coverage()["later"].values() for identity in ids]
    assert len(set(later)) == len(later)
    assert not set(later) & set(examples())


def test_every_example_says_how_it_was_obtained():
    allowed = ("read", "read in a public reworking of the example", "from memory (confidence")
    for identity in examples():
        assert example(identity).obtained.startswith(allowed), identity


def test_every_function_names_its_source():
    for identity, function in REGISTERED.items():
        assert "read" in function.__doc__ or "from memory" in function.__doc__ or identity == "CA-F", identity


def test_attribution_is_kept():
    lines = (FOLDER / "stanton_pannell_1914.csv").read_text(encoding="utf-8").splitlines()
    assert "Stanton" in lines[0]
    assert "CC-BY-4.0" in lines[1]
