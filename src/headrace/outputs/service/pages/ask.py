"""The form that takes a scenario."""

from __future__ import annotations

from headrace.outputs.service.http import Response
from headrace.outputs.service.pages.frame import page
from headrace.outputs.service.pages.markup import Html, tag

QUESTIONS = (
    ("refills", "What must be put back?"),
    ("drains", "What does each outlet take?"),
    ("ceiling", "What is the largest yield?"),
    ("grows", "Does the strain grow?"),
)
_BLANK = """title = ""
host = ""
growth = "0.1 /h"

[[feed]]
substrate = ""
uptake = "6.0 mmol/gDW/h"

[[outlet]]
product = ""
rate = "1.0 mmol/gDW/h"
"""


def form(text: str = "", wrong: str = "", may_save: bool = True, status: int = 200) -> Response:
    """The form, with what was wrong about the scenario that came before."""
    said = tag("pre", wrong, class_="wrong", role="alert") if wrong else None
    area = tag("textarea", text or _BLANK, id="scenario", name="scenario", rows="18", spellcheck="false", required=True)
    choices = [tag("option", label, value=name) for name, label in QUESTIONS]
    question = tag("p", tag("label", "Question", for_="question"), " ", tag("select", *choices, id="question", name="question"))
    box = tag("input", type="checkbox", id="save", name="save", value="true", checked=True)
    save: Html | None = tag("p", box, " ", tag("label", "Save the answer", for_="save")) if may_save else None
    inner = (
        tag("label", "The scenario (TOML)", for_="scenario"),
        area,
        question,
        save,
        tag("p", tag("button", "Ask"), class_="actions"),
    )
    return page("Ask", said, tag("form", *inner, action="/ask", method="post"), status=status, here="/ask")
