"""The command line: exit codes, messages, formats. A desk with hand-made answers stands in for the core."""

from __future__ import annotations

import json
import re
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import msgspec
import pytest
from typer.testing import CliRunner

from headrace.errors import InputError, MissingPartError
from headrace.outputs.cli import later, main, seam, shared
from headrace.outputs.cli.shared import Format
from headrace.values.answers import Document, Result
from tests.outputs import samples

COMMANDS = ("drains", "refills", "ceiling", "grows")


class Desk:
    """Answers every question with the hand-made result of its kind, or with what a test sets."""

    facts = samples.facts()
    answers: dict[str, Any] = {}

    def __init__(self) -> None:
        self.plugins = self

    def _give(self, kind: str) -> Result:
        given = self.answers.get(kind, samples.result(kind))
        if isinstance(given, Exception):
            raise given
        return given

    def scenario(self, question: object) -> object:
        return question

    def drains(self, question: object) -> Result:
        return self._give("drains")

    def refills(self, question: object, progress: object = None, ranges: bool = False) -> Result:
        return self._give("refills")

    def ceiling(self, question: object, outlet: str = "") -> Result:
        return self._give("ceiling")

    def grows(self, question: object) -> Result:
        return self._give("grows")

    def report(self, result: Result) -> tuple[Document, ...]:
        return (Document("one.md", "text/markdown", "# one\n"),)


@pytest.fixture
def desk(monkeypatch: pytest.MonkeyPatch) -> type[Desk]:
    monkeypatch.setattr(Desk, "answers", {})
    monkeypatch.setattr(shared, "desk", Desk)
    return Desk


Run = Callable[..., tuple[int, str, str]]


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Run:
    """Run the entry point as the shell would: exit code, standard output, standard error."""

    def call(*arguments: str) -> tuple[int, str, str]:
        monkeypatch.setattr(sys, "argv", ["headrace", *arguments])
        with pytest.raises(SystemExit) as stopped:
            main.run()
        out, err = capsys.readouterr()
        return int(stopped.value.code or 0), out, err

    return call


def test_typers_own_runner_works_too(desk: type[Desk]) -> None:
    found = CliRunner().invoke(main.build(), ["refills", "s.toml", "--format", "json"], standalone_mode=False)
    assert found.return_value == 0
    assert json.loads(found.stdout)["answer"] == "feasible"


@pytest.mark.parametrize("command", COMMANDS)
@pytest.mark.parametrize("format", list(Format))
def test_every_command_prints_every_format(desk: type[Desk], run: Run, command: str, format: Format) -> None:
    code, out, err = run(command, "s.toml", "--format", format)
    assert (code, err) == (0, "")
    starts = {"json": "{", "md": "# AB-1", "table": "AB-1"}
    assert out.startswith(starts.get(format, "")) and out.endswith("\n")


def test_no_is_exit_1(desk: type[Desk], run: Run) -> None:
    desk.answers["refills"] = samples.result("refills", samples.infeasible())
    assert run("refills", "s.toml")[0] == 1
    grows = samples.result("grows")
    desk.answers["grows"] = msgspec.structs.replace(grows, answer=msgspec.structs.replace(grows.answer, grows=False))
    assert run("grows", "s.toml")[0] == 1
    ceiling = samples.result("ceiling")
    none = msgspec.structs.replace(ceiling.answer, answer="infeasible", mol_per_mol=None)
    desk.answers["ceiling"] = msgspec.structs.replace(ceiling, answer=none)
    assert run("ceiling", "s.toml")[0] == 1


def test_rates_are_added_when_asked(desk: type[Desk], run: Run) -> None:
    assert "Rates of the reactions" not in run("refills", "s.toml")[1]
    assert "Rates of the reactions" in run("refills", "s.toml", "--rates")[1]


def test_a_user_s_mistake_is_one_block_and_exit_2(desk: type[Desk], run: Run) -> None:
    desk.answers["refills"] = InputError(
        "reads as no rate", file="s.toml", line=7, key="feed[0].uptake", read="6.0 mmol", accepted='a rate such as "6.0 mmol/gDW/h"'
    )
    code, out, err = run("refills", "s.toml")
    assert (code, out) == (2, "")
    assert err.splitlines() == [
        "headrace: s.toml, line 7, feed[0].uptake: reads as no rate",
        "  read: '6.0 mmol'",
        '  accepted: a rate such as "6.0 mmol/gDW/h"',
    ]


def test_a_missing_part_is_exit_3(desk: type[Desk], run: Run) -> None:
    desk.answers["refills"] = MissingPartError("pyshacl", "checking shapes", hint="pip install pyshacl")
    code, _, err = run("refills", "s.toml")
    assert code == 3 and "checking shapes needs pyshacl" in err


def test_a_file_that_cannot_be_read_is_no_traceback(desk: type[Desk], run: Run) -> None:
    desk.answers["refills"] = PermissionError(13, "Permission denied", "s.toml")
    code, _, err = run("refills", "s.toml")
    assert (code, err) == (2, "headrace: s.toml: can't be read or written: permission denied\n")


def test_a_bug_says_that_it_is_one_and_how_to_report_it(desk: type[Desk], run: Run, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("HEADRACE_TRACE", raising=False)
    desk.answers["refills"] = KeyError("oops")
    code, out, err = run("refills", "s.toml")
    assert (code, out) == (seam.BUG, "")
    assert "this is a bug in Headrace, not in your input: KeyError: 'oops'" in err and "issue tracker" in err
    assert "Traceback" not in err
    monkeypatch.setenv("HEADRACE_TRACE", "1")
    assert "Traceback" in run("refills", "s.toml")[2]


def test_control_c_is_quiet(desk: type[Desk], run: Run, monkeypatch: pytest.MonkeyPatch) -> None:
    def stopped(self: Desk, kind: str) -> Result:
        raise KeyboardInterrupt

    monkeypatch.setattr(Desk, "_give", stopped)
    code, out, err = run("refills", "s.toml")
    assert (code, out) == (seam.STOPPED, "") and "Traceback" not in err


@pytest.mark.parametrize("name", later.NAMES)
@pytest.mark.parametrize("rest", ["", "a b --vary growth=0:1:5 -o x.parquet", "--help"])
def test_what_is_not_built_yet_is_refused_by_name(run: Run, name: str, rest: str) -> None:
    code, out, err = run(name, *rest.split())
    assert (code, out) == (2, "")
    assert err.startswith(f"headrace: headrace {name} is not built yet")


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ("refils s.toml", "no such command 'refils'"),
        ("refills", "missing argument 'SCENARIO'"),
        ("refills s.toml --fromat json", "no such option: --fromat"),
        ("refills s.toml --format xml", "'xml' is not one of 'table', 'json', 'csv', 'md'"),
        ("review s.toml", "missing option '-o'"),
        ("facts shew", "no such command 'shew'"),
    ],
)
def test_a_wrong_call_names_what_is_wrong_and_what_is_accepted(run: Run, arguments: str, message: str) -> None:
    code, out, err = run(*arguments.split())
    assert (code, out) == (2, "")
    assert message in err and "headrace" in err and "--help lists" in err


def test_help_lists_what_there_is_and_nothing_else(run: Run) -> None:
    code, out, _ = run("--help")
    assert code == 0
    commands = out.split("Commands:")[1]
    listed = set(re.findall(r"^  (\w+) ", commands, re.M))
    assert {"drains", "refills", "ceiling", "grows", "review", "facts", "plugins", "new"} <= listed
    assert not listed & set(later.NAMES)
    assert "..." not in commands, "a summary is cut off"


def test_a_review_writes_its_documents_and_lists_them(desk: type[Desk], run: Run, tmp_path: Path) -> None:
    code, out, err = run("review", "s.toml", "-o", str(tmp_path / "out"))
    assert (code, err) == (0, "")
    assert out == f"{tmp_path / 'out' / 'one.md'}\n"


def test_two_scenarios_that_would_share_a_document_are_refused_before_anything_is_written(
    desk: type[Desk], run: Run, tmp_path: Path
) -> None:
    code, _, err = run("review", "a/s.toml", "b/s.toml", "-o", str(tmp_path / "out"))
    assert code == 2 and "would both write one.md" in err
    assert not (tmp_path / "out").exists()


def test_an_infeasible_review_is_written_and_exit_1(desk: type[Desk], run: Run, tmp_path: Path) -> None:
    desk.answers["refills"] = samples.result("refills", samples.infeasible())
    assert run("review", "s.toml", "-o", str(tmp_path))[0] == 1
    assert (tmp_path / "one.md").exists()


def as_process(code: str, **options: Any) -> subprocess.CompletedProcess[str]:
    return subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, timeout=60, **options)


def test_a_reader_that_stops_early_is_quiet() -> None:
    code = "from headrace.outputs.cli.terminal import emit\nimport sys\nemit('x\\n' * 1000000)\nsys.exit(0)"
    command = [sys.executable, "-c", code]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True) as writer:
        assert writer.stdout is not None and writer.stderr is not None
        writer.stdout.readline()
        writer.stdout.close()
        assert writer.stderr.read() == ""
        assert writer.wait(timeout=60) == 0


def test_a_terminal_that_knows_little_still_gets_an_answer() -> None:
    code = "from headrace.outputs.cli.terminal import emit\nemit('a – †\\n')\n"
    found = as_process(code, env={"PYTHONIOENCODING": "ascii", "PYTHONPATH": ":".join(sys.path)})
    assert (found.returncode, found.stdout) == (0, "a ? ?\n")
    exact = as_process(code.replace("\\n')", "\\n', exact=True)"), env={"PYTHONIOENCODING": "ascii", "PYTHONPATH": ":".join(sys.path)})
    assert exact.stdout == "a – †\n"


def test_starting_the_command_line_imports_nothing_heavy() -> None:
    heavy = ["numpy", "highspy", "rdflib", "pandas", "networkx", "pint", "flint", "pyoxigraph", "rich.console", "pydantic", "headrace.run"]
    code = f"import sys\nfrom headrace.outputs.cli import main\nmain.build()\nprint([name for name in {heavy!r} if name in sys.modules])"
    assert as_process(code, env={"PYTHONPATH": ":".join(sys.path)}).stdout == "[]\n"
