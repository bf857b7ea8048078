"""The error tree: exit codes, one readable message each, plain data."""

import pytest

from headrace.errors import FactsError, HeadraceError, InputError, MissingPartError, PluginError


@pytest.mark.parametrize(
    ("error", "code"),
    [
        (HeadraceError("no"), 2),
        (InputError("no"), 2),
        (FactsError("no"), 2),
        (MissingPartError("shacl", "checking shapes"), 3),
        (PluginError("drains.lipids", "no families"), 2),
    ],
)
def test_exit_codes(error: HeadraceError, code: int) -> None:
    assert error.exit_code == code
    assert isinstance(error, HeadraceError)


def test_input_error_says_where_what_and_what_else() -> None:
    error = InputError(
        "unknown unit",
        file="a.toml",
        line=7,
        key="[[feed]] uptake",
        read="6 pints",
        accepted="mmol/gDW/h",
        near=["point"],
        hint="see the README",
    )
    assert str(error).splitlines() == [
        "a.toml, line 7, [[feed]] uptake: unknown unit",
        "  read: '6 pints'",
        "  accepted: mmol/gDW/h",
        "  nearest: point",
        "  see the README",
    ]
    assert error.data == {
        "file": "a.toml",
        "line": 7,
        "key": "[[feed]] uptake",
        "read": "6 pints",
        "accepted": "mmol/gDW/h",
        "near": ["point"],
    }


def test_a_reader_adds_the_place_without_overwriting() -> None:
    bare = InputError("unknown host 'x'", read="x", near=["y"], hint="list them")
    placed = bare.at(file="a.toml", line=2, key="host")
    assert (placed.file, placed.line, placed.key) == ("a.toml", 2, "host")
    assert placed.near == ("y",) and placed.hint == "list them"
    assert placed.at(file="b.toml", line=9, key="other").data == placed.data


def test_zero_and_false_are_shown_as_read() -> None:
    assert "read: 0" in str(InputError("must be positive", read=0))
    assert InputError("must be text", read=False).data["read"] is False


def test_facts_error_counts_the_rest() -> None:
    error = FactsError("oxygen: 3 taken, 2 made", file="reactions/x.ttl", node="r:x", others=4)
    assert str(error).splitlines() == [
        "reactions/x.ttl, r:x: oxygen: 3 taken, 2 made",
        "  and 4 more: headrace facts check lists all",
    ]


def test_missing_part_and_plugin_errors_name_the_part() -> None:
    assert str(MissingPartError("pyarrow", "writing Parquet", "pip install pyarrow")).splitlines() == [
        "writing Parquet needs pyarrow, which is not installed",
        "  pip install pyarrow",
    ]
    assert str(PluginError("tall", "has no name")) == "plugin tall: has no name"
