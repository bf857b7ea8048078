"""Reading: TOML and JSON alike, lines of keys, limits, plain data, and the JSON Schema."""

from __future__ import annotations

import json
import os
import tomllib
from pathlib import Path
from typing import Any

import jsonschema
import pytest
from hypothesis import given
from hypothesis import strategies as st

from headrace import case
from headrace.case.locate import json_lines, toml_lines
from headrace.case.model import LONGEST_LIST
from headrace.errors import InputError

from ..broken_scenarios import all_broken
from .world import TEXT, stated

LOCATED = '''\
# "a" = [
title = "a # [no]"
feed-note = """
two lines = 1
"""
[[feed]]
substrate = 'glucose'   # x = 1
uptake = "6"
[[feed]]
substrate = "b"

[strain]
remove = [
  "a", # one
  'b',
]
limit = { a-b = "1", "4.1.1.31" = "2",
  c.d = [{ x = 1 }] }
[outlet.options]
"quoted \\"key\\"" = 1979-05-27 07:32:00
'''


def paths(value: Any, path: str = "") -> set[str]:
    """Every key path of plain data, found independently of the scanner."""
    found = {path} if path else set()
    if isinstance(value, dict):
        for key, each in value.items():
            found |= paths(each, f"{path}.{key}" if path else key)
    elif isinstance(value, list):
        for index, each in enumerate(value):
            found |= paths(each, f"{path}[{index}]")
    return found


def test_lines_of_toml() -> None:
    if tomllib_reads_inline_breaks():
        text = LOCATED
    else:
        text = LOCATED.replace('"2",\n  c.d', '"2", c.d')
    lines = toml_lines(text)
    expected = {"title": 2, "feed-note": 3, "feed": 6, "feed[0].substrate": 7, "feed[0].uptake": 8, "feed[1]": 9, "strain": 12}
    assert expected.items() <= lines.items()
    assert (lines["strain.remove[0]"], lines["strain.remove[1]"], lines["strain.limit.4.1.1.31"]) == (14, 15, 17)
    assert lines['outlet.options.quoted "key"'] == text[: text.index('"quoted')].count("\n") + 1
    assert set(lines) == paths(tomllib.loads(text))


def tomllib_reads_inline_breaks() -> bool:
    try:
        tomllib.loads("a = { b = 1,\n c = 2 }")
    except ValueError:
        return False
    return True


def test_lines_of_json() -> None:
    text = '{\n "a": [1,\n {"b": "x\\"y"}],\n "c": {"d": null, "\\u00e9": true}\n}'
    assert json_lines(text) == {"a": 2, "a[0]": 2, "a[1]": 3, "a[1].b": 3, "c": 4, "c.d": 4, "c.é": 4}


KEYS = st.text(alphabet='ab"\\. é#=[]{}\n', min_size=1, max_size=6)
PRINTED = st.text(st.characters(codec="utf-8", exclude_categories=["Cc", "Cs"]), max_size=8)
DATA = st.recursive(
    st.booleans() | st.integers(-9, 9) | PRINTED,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(KEYS, inner, max_size=3),
    max_leaves=12,
)


@given(st.dictionaries(KEYS, DATA, max_size=4), st.sampled_from([None, 1]))
def test_every_key_of_any_json_has_a_line(data: dict[str, Any], indent: int | None) -> None:
    text = json.dumps(data, indent=indent, ensure_ascii=False)
    lines = json_lines(text)
    assert set(lines) == paths(data)
    assert all(1 <= line <= text.count("\n") + 1 for line in lines.values())


def as_toml(value: Any) -> str:
    """A value as inline TOML."""
    if isinstance(value, dict):
        return "{" + ", ".join(f"{as_toml(key)} = {as_toml(each)}" for key, each in value.items()) + "}"
    if isinstance(value, list):
        return "[\n" + ", ".join(as_toml(each) for each in value) + "]"
    return json.dumps(value, ensure_ascii=False)


@given(st.dictionaries(KEYS, DATA, max_size=4))
def test_every_key_of_any_toml_has_a_line(data: dict[str, Any]) -> None:
    text = "".join(f"{as_toml(key)} = {as_toml(value)}\n" for key, value in data.items()).replace("{\n", "{")
    if tomllib_reads_inline_breaks() or "[\n" not in text:
        assert tomllib.loads(text) == data
        assert set(toml_lines(text)) == paths(data)


def test_toml_json_and_python_say_the_same(tmp_path: Path) -> None:
    raw = tomllib.loads(TEXT)
    (tmp_path / "a.toml").write_text(TEXT)
    (tmp_path / "b.json").write_text(json.dumps(raw))
    scenarios = [
        case.read(tmp_path / "a.toml"),
        case.read(str(tmp_path / "b.json")),
        case.read(TEXT),
        case.read(json.dumps(raw)),
        case.read(TEXT.replace("\n", " \n"), name="a"),
        case.from_dict(raw),
    ]
    assert all(scenario.raw == raw and scenario.title == "meadow" for scenario in scenarios)
    assert scenarios[0].text == TEXT and scenarios[0].path.endswith("a.toml")


def test_a_title_left_out_is_the_files_name(tmp_path: Path) -> None:
    path = tmp_path / "oil-run.toml"
    path.write_text(TEXT.replace('title = "meadow"\n', ""))
    assert case.read(path).title == "oil-run"


@pytest.mark.parametrize("mark", [b"\xef\xbb\xbf", b""])
@pytest.mark.parametrize("ending", [b"\r\n", b"\n"])
def test_marks_and_line_endings_of_other_systems(tmp_path: Path, mark: bytes, ending: bytes) -> None:
    path = tmp_path / "a.toml"
    path.write_bytes(mark + TEXT.replace("2 mmol/gDW/h", "2 mmol").encode().replace(b"\n", ending))
    with pytest.raises(InputError) as caught:
        case.read(path)
    assert (caught.value.key, caught.value.line) == ("feed[0].uptake", 7)


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="this system has no named pipes")
def test_a_pipe_is_not_waited_for(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe.toml")
    with pytest.raises(InputError, match="not an ordinary file"):
        case.read(tmp_path / "pipe.toml")


@pytest.mark.skipif(hasattr(os, "geteuid") and os.geteuid() == 0, reason="root reads every file")
def test_a_file_without_permission(tmp_path: Path) -> None:
    path = tmp_path / "a.toml"
    path.write_text(TEXT)
    path.chmod(0)
    with pytest.raises(InputError, match="can't be read"):
        case.read(path)


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("x = " + "[\n" * 5000, "nested too deeply"),
        ('{"x": ' * 5000, "nested too deeply|not JSON"),
        ("a." * 400 + "b = 1\n", "nested too deeply"),
        (".".join(f'"{n}"' for n in range(3000)) + " = 1\n", "line is too long"),
        ('host = "a\\u0000b"\n', "control characters"),
        ('{"host": "\\ud800"}', "half a character"),
        ("title = 0x" + "f" * 4000 + "\n", "too many digits"),
        ("growth = inf\n", "not finite"),
        ('{"growth": 1e999}', "not finite"),
        ("[strain]\nremove = [" + '"ab", ' * (LONGEST_LIST + 1) + "]\n", "too many entries"),
        ("[" + "a." * 10 + "b]\nx = [[1]]\n", "nested too deeply"),
    ],
)
def test_hostile_texts_end_in_one_message(text: str, says: str) -> None:
    with pytest.raises(InputError, match=says) as caught:
        case.read('host = "meadow"\n[[feed]]\nsubstrate = "sugar"\n' + text if says == "too many entries" else text, name="x")
    assert len(str(caught.value)) < 1500


@given(st.text(max_size=200) | st.text(alphabet='[]{}="\'\n.#ab1 ,', max_size=60))
def test_any_text_is_read_or_refused(text: str) -> None:
    try:
        case.read(text, name="any.toml")
    except InputError as error:
        str(error).encode()


@given(DATA)
def test_any_plain_data_is_read_or_refused(data: Any) -> None:
    try:
        case.from_dict({"host": "meadow", "feed": [{"substrate": "sugar"}], "strain": data, "title": "t"})
    except InputError as error:
        assert error.key.startswith("strain")


def test_plain_data_has_keys_but_no_lines() -> None:
    with pytest.raises(InputError) as caught:
        case.from_dict({"host": "meadow", "feed": [{"substrate": "sugar", "uptake": 2}]})
    assert (caught.value.key, caught.value.line, caught.value.file) == ("feed[0].uptake", None, "")


def test_the_schema_takes_what_is_read() -> None:
    jsonschema.Draft202012Validator.check_schema(case.schema())
    full = stated(
        '[conditions]\noxygen = "limited"\noxygen-rate = "3 mmol/gDW/h"\n'
        'supplements = ["vitamin", { compound = "acid", rate = "1 mmol/gDW/h" }]\nrelease = []\n'
        '[strain]\nremove = ["a"]\nadd = ["b"]\nlimit = { c = "1 U/mg" }\n[energy]\np-o-nadh = "2 mol/mol"\n'
        '[aim]\nslack = "5 %"\nexpression = "open"\n[plugin.x]\ny = 1\n'
        '[[outlet]]\nproduct = "acid"\nyield = "0.3 mol/mol"\noptions = { z = 2 }\n'
    )
    for text in (TEXT, full, stated(growth="0")):
        jsonschema.validate(case.read(text).raw, case.schema())


def test_the_schema_refuses_unknown_keys_and_bare_numbers() -> None:
    """What is wrong in its keys or types is wrong by the schema too; units and names are not the schema's business."""
    validator = jsonschema.Draft202012Validator(case.schema())
    names = ("unknown-key-in-feed.toml", "uptake-bare-number.toml", "oxygen-misspelt.toml", "host-missing.toml",
             "measured-oxygen-bare.toml", "parent-other-host.toml", "phase-in-hours.toml", "phase-without-duration.toml")
    broken = [each for each in all_broken() if each.name in names or each.name.startswith("planned-")]
    assert len(broken) == 10
    for each in broken:
        raw = tomllib.loads(each.path(Path()).read_text())
        assert not validator.is_valid(raw), each.name
