"""A scenario answered in a worker: the question in, the JSON document and the run's graph out."""

from __future__ import annotations

import json
from datetime import UTC, datetime
from typing import TYPE_CHECKING

import msgspec

import headrace
from headrace import case as cases
from headrace.errors import HeadraceError, InputError
from headrace.outputs import jsonout
from headrace.outputs.rdf import run as runs
from headrace.outputs.service.asking_types import QUESTIONS, Question, Reply
from headrace.pages import answers, html
from headrace.run import Desk

if TYPE_CHECKING:
    from headrace.values.answers import Result

NAME = "scenario"


class AskWork:
    """Answers scenarios with facts and plugins that were loaded once."""

    def __init__(self) -> None:
        self.desk = Desk()

    def refresh(self) -> None:
        """Facts do not change while the service runs."""

    def handle(self, data: bytes) -> bytes:
        """A question's bytes to a reply's bytes."""
        question = msgspec.msgpack.decode(data, type=Question)
        started = datetime.now(UTC)
        try:
            result = self._result(question)
        except HeadraceError as error:
            return msgspec.msgpack.encode(Reply(wrong=str(error), data=json.loads(json.dumps(error.data, default=str))))
        made = runs.make(result, started, question.rates, question.agent)
        document = jsonout.text(jsonout.document(result, headrace.__version__, question.rates))
        page = answers.page(result, headrace.__version__, question.rates)
        return msgspec.msgpack.encode(Reply(document, made.name, made.trig, html.page(page), page.title))

    def _result(self, question: Question) -> Result:
        scenario = cases.read(question.text, NAME)  # with a name, a text is never a path
        if question.what == "ceiling":
            return self.desk.ceiling(scenario, question.outlet)
        if question.what not in QUESTIONS:
            raise InputError(f"no question {question.what!r}", accepted=", ".join(QUESTIONS))
        answered: Result = getattr(self.desk, question.what)(scenario)
        return answered
