"""IRIs of results, and of the standards that results use. Plain text, no logic."""

from __future__ import annotations

from headrace.graph.terms import DCTERMS, HR, ID, PROV, QUDT

RUN_BASE = ID + "run/"
FACTS_VERSION_BASE = ID + "facts/"

# Classes of a run's parts
RUN = HR + "Run"
SCENARIO = HR + "Scenario"
CASE = HR + "Case"
ROW = HR + "Row"
DEMAND = HR + "Demand"
LIMIT = HR + "Limit"
PLUGIN = HR + "Plugin"

# Properties of a run and its parts
PART = HR + "part"
INDEX = HR + "index"
TABLE = HR + "table"
QUESTION = HR + "question"
NAME = HR + "name"
NUMBER = HR + "number"
SCENARIO_TEXT = HR + "scenarioText"
SCENARIO_NAME = HR + "scenarioName"
HOST = HR + "host"
OF_SCENARIO = HR + "scenario"
OF_CASE = HR + "case"
GROWTH = HR + "growth"
GROWTH_YIELD = HR + "growthYield"
BREATHES = HR + "aeration"
ADDED = HR + "added"
REMOVED_GENE = HR + "removedGene"
REMOVED_ROW = HR + "removedRow"
SUPPLEMENT = HR + "supplement"
RELEASES = HR + "releases"
OPENED = HR + "opened"
SLACK = HR + "slack"
UPTAKE = HR + "uptake"
RATE = HR + "rate"
YIELD = HR + "yieldPerFeed"
FORM_NAME = HR + "formName"
MOLAR_MASS = HR + "molarMass"
LIMITED_ROW = HR + "limitedRow"
POOL = HR + "pool"
FACTS_VERSION = HR + "factsVersion"

# PROV-O
USED = PROV + "used"
STARTED = PROV + "startedAtTime"
ENDED = PROV + "endedAtTime"
SOFTWARE_AGENT = PROV + "SoftwareAgent"
AGENT = PROV + "Agent"
ATTRIBUTED_TO = PROV + "wasAttributedTo"

TITLE = DCTERMS + "title"
CREATED = DCTERMS + "created"
DATE_TIME = "http://www.w3.org/2001/XMLSchema#dateTime"
HAS_QUANTITY = QUDT + "hasQuantity"
