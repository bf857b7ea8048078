"""Loading the four-reaction world, and what the loader says about broken files.

The world (tests/graph/world), solved on paper for 1 oxaloacetate made from pyruvate:
  carboxylase     1     pyruvate + bicarbonate + ATP -> oxaloacetate + ADP + phosphate + H+
  respiration     0.08  = 1 ATP / 12.5 ATP per pyruvate; makes 3 x 0.08 = 0.24 CO2, takes 2.5 x 0.08 = 0.2 O2
  anhydrase       1     CO2 + water -> bicarbonate + H+; 0.24 CO2 comes from respiration, 0.76 from outside
  uptake          1.08  pyruvate
"""

import shutil
import subprocess
import sys
from collections import defaultdict
from fractions import Fraction
from pathlib import Path

import pytest

from headrace.errors import FactsError
from headrace.graph import load
from headrace.graph.build import collect
from headrace.graph.files import fact_files, version
from headrace.graph.read import Graph
from headrace.values.facts import Facts, Isozyme, Term

WORLD = Path(__file__).parent / "world"


@pytest.fixture(scope="module")
def facts() -> Facts:
    return load([WORLD], cache=False)


@pytest.fixture
def copy(tmp_path: Path) -> Path:
    return Path(shutil.copytree(WORLD, tmp_path / "world"))


def test_sums_on_paper(facts: Facts) -> None:
    rates = {
        "pyruvate-carboxylase": Fraction(1),
        "pyruvate-respiration": Fraction("0.08"),
        "carbonic-anhydrase": Fraction(1),
        "pyruvate-uptake": Fraction("1.08"),
    }
    pools: dict[str, Fraction] = defaultdict(Fraction)
    for row in facts.hosts["paper-cell"].reactions:
        for term in facts.reactions[row.reaction].terms:
            pools[f"{term.side} {term.compound}".strip()] += term.count * rates[row.reaction]
    inside = {"pyruvate": pools["pyruvate"] + pools["inner pyruvate"], "oxaloacetate": pools["oxaloacetate"]}
    assert inside == {"pyruvate": 0, "oxaloacetate": 1}
    assert pools["atp"] == pools["adp"] == pools["bicarbonate"] == 0
    assert pools["carbon-dioxide"] == Fraction("-0.76")
    assert pools["oxygen"] == Fraction("-0.2")
    assert pools["outer pyruvate"] == Fraction("-1.08")


def test_counts_and_numbers_are_exact(facts: Facts) -> None:
    assert Term("adp", Fraction(-25, 2)) in facts.reactions["pyruvate-respiration"].terms
    assert Term("water", Fraction(29, 2)) in facts.reactions["pyruvate-respiration"].terms
    number = facts.hosts["paper-cell"].quantities[0]
    assert (number.value, number.text, number.low, number.high) == (Fraction(3, 2), "1.50", Fraction(6, 5), Fraction(9, 5))
    assert (number.about, number.kind, number.unit, number.condition) == (
        "paper-cell",
        "maintenance",
        "mmol-per-gdw-h",
        "present",
    )


def test_contents_are_derived(facts: Facts) -> None:
    assert {slug: content for slug, content in facts.contents.items() if content} == {"oxaloacetate": 1}
    assert set(facts.contents) == set(facts.compounds)


def test_compounds(facts: Facts) -> None:
    oxaloacetate = facts.compounds["oxaloacetate"]
    assert oxaloacetate.formula == {"C": 4, "H": 2, "O": 5} and oxaloacetate.charge == -2
    assert oxaloacetate.anchor and not oxaloacetate.carrier and not oxaloacetate.membrane
    assert oxaloacetate.chebi == "CHEBI:16452" and oxaloacetate.aliases == ("2-oxobutanedioate",)
    assert facts.compounds["atp"].carrier and facts.compounds["pyruvate"].precursor
    assert oxaloacetate.basis.reading == "seen" and oxaloacetate.basis.sources == ("paper-sums",)


def test_reactions(facts: Facts) -> None:
    carboxylase = facts.reactions["pyruvate-carboxylase"]
    assert (carboxylase.ec, carboxylase.rhea, carboxylase.enzyme) == (("6.4.1.1",), ("20844",), "pyruvate-carboxylase")
    assert carboxylase.cofactors == ("biotin",), "taken over from the enzyme"
    assert facts.reactions["oxaloacetate-decarboxylase"].ec == ("4.1.1.-",)
    assert facts.reactions["pyruvate-respiration"].lumped
    uptake = facts.reactions["pyruvate-uptake"]
    assert uptake.transport and Term("pyruvate", Fraction(-1), "outer") in uptake.terms


def test_the_host(facts: Facts) -> None:
    host = facts.hosts["paper-cell"]
    rows = {row.slug: row for row in host.reactions}
    assert rows["pyruvate-carboxylase"].isozymes == (Isozyme(("pycA", "pycB")), Isozyme(("pycC",)))
    assert rows["pyruvate-carboxylase"].expression == ("always", "other-feeds")
    assert rows["pyruvate-carboxylase"].basis.note == "Two subunits; or one long chain."
    assert (rows["pyruvate-uptake"].outer, rows["pyruvate-uptake"].inner) == ("medium", "cytosol")
    assert {item.slug: item.role for item in host.compartments} == {
        "cytosol": "cytosol",
        "medium": "medium",
        "cytoplasmic-membrane": "membrane",
    }
    rule = {item.slug: item for item in host.expressions}["other-feeds"]
    assert (rule.level, rule.feed_without, rule.circumstances) == ("basal", ("pyruvate",), ("acid-stress",))
    assert rule.removed_regulators == ("regP",) and not rule.fitted
    assert [(part.compound, part.amount) for part in host.composition] == [("oxaloacetate", 2)]
    assert host.absences[0].reaction == "oxaloacetate-decarboxylase"
    assert (host.releases[0].compound, host.releases[0].oxygen) == ("bicarbonate", "present")
    assert host.taxon == "32644" and host.required_supplements == ("biotin",)


def test_outlets_routes_and_words(facts: Facts) -> None:
    outlet = facts.outlets["oxaloacetic-acid"]
    assert outlet.draws == {"oxaloacetate": 1} and outlet.family == "organic-acids"
    assert [(form.label, form.default) for form in outlet.forms] == [("disodium salt", False), ("free acid", True)]
    route = facts.routes["bicarbonate-from-carbon-dioxide"]
    assert (route.makes, route.hosts, route.uses) == ("bicarbonate", ("paper-cell",), ("carbonic-anhydrase",))
    assert facts.sources["invented-organism"].doi == "10.1000/paper"
    assert facts.units["mmol-per-gdw"] == "mmol/gDW" and facts.circumstances == {"acid-stress": "acid stress"}
    assert facts.roles["energy-release"] == ("pyruvate-respiration",)
    assert facts.roles["inorganic-carbon"] == ("bicarbonate", "carbon-dioxide")
    assert "electron-carrier" not in facts.roles
    assert facts.electron_pairs == {"atp": "adp"}


def swap(folder: Path, name: str, old: str, new: str) -> None:
    path = folder / name
    text = path.read_text()
    assert old in text
    path.write_text(text.replace(old, new, 1))


HOST = "hosts/paper-cell/"
BROKEN = [
    ("compounds/all.ttl", '"C4H2O5"', '"C4H3O5"', "reaction/oxaloacetate-decarboxylase", "H: 4 taken, 3 made"),
    (
        "compounds/all.ttl",
        "hr:charge -2 ;\n  hr:chebi obo:CHEBI_16452",
        "hr:charge -1 ;\n  hr:chebi obo:CHEBI_16452",
        "",
        "charge: ",
    ),
    ("compounds/all.ttl", '"C4H2O5"', '"C4H2O5R"', "", "R: 1 taken, 0 made"),
    ("compounds/all.ttl", '"C4H2O5"', '"c4h2o5"', "compound/oxaloacetate", "accepted: a plain formula"),
    ("compounds/all.ttl", "hr:anchor true", 'hr:anchor "yes"', "compound/oxaloacetate", "wants true"),
    ("compounds/all.ttl", "hr:reading hr:seen", "hr:reading hr:believed", "compound/adp", "hr:believed; accepted: hr:seen"),
    ("compounds/all.ttl", "dcterms:source s:paper-sums ;\n", "", "compound/adp", "has no dcterms:source"),
    ("compounds/all.ttl", "hr:charge -3", "hr:charge -3.5", "compound/adp", "wants a whole number"),
    ("compounds/all.ttl", "hr:charge -3", "hr:charge -3 , -2", "compound/adp", "has 2 values"),
    ("compounds/all.ttl", "hr:charge -3 ;\n", "", "compound/adp", "has no hr:charge"),
    ("compounds/all.ttl", "obo:CHEBI_456216", "obo:CHEBI_x", "compound/adp", "reads obo:CHEBI_x; accepted: such as obo:CHEBI_"),
    ("reactions/all.ttl", "hr:count 2.5", 'hr:count "2.5"', "reaction/pyruvate-respiration", "wants a number"),
    ("reactions/all.ttl", "hr:count 2.5", "hr:count 2.5e0", "reaction/pyruvate-respiration", "wants a number"),
    ("reactions/all.ttl", "hr:count 2.5", "hr:count -2.5", "reaction/pyruvate-respiration", "a number above 0"),
    (
        "reactions/all.ttl",
        "hr:compound c:oxygen",
        "hr:compound c:oxigen",
        "reaction/pyruvate-respiration",
        "compound/oxigen: no such",
    ),
    ("reactions/all.ttl", "ec:6.4.1.1", "ec:6.4.1", "reaction/pyruvate-carboxylase", "6.4.1"),
    ("reactions/all.ttl", '"4.1.1.-"', '"4.1.1"', "reaction/oxaloacetate-decarboxylase", "accepted: such as 1.1.1.-"),
    ("reactions/all.ttl", "rh:20844", "rh:RHEA-20844", "reaction/pyruvate-carboxylase", "hr:rhea"),
    (
        "reactions/all.ttl",
        "hr:enzyme e:pyruvate-carboxylase",
        "hr:enzyme e:nobody",
        "reaction/pyruvate-carboxylase",
        "enzyme/nobody",
    ),
    ("reactions/all.ttl", " ; hr:side hr:inner", "", "reaction/pyruvate-uptake", "has no hr:side"),
    ("reactions/all.ttl", "a hr:Reaction ,\n    hr:Transport", "a hr:Reaction", "reaction/pyruvate-uptake", "no hr:Transport"),
    (
        HOST + "reactions.ttl",
        "hr:direction hr:forward",
        "hr:direction hr:sideways",
        "host/paper-cell/pyruvate-carboxylase",
        "hr:sideways",
    ),
    (HOST + "reactions.ttl", "hr:outer :medium", "hr:outer :vacuole", "host/paper-cell/pyruvate-uptake", "vacuole: no such"),
    (HOST + "reactions.ttl", "hr:outer :medium", "hr:outer :cytosol", "host/paper-cell/pyruvate-uptake", "both sides"),
    (HOST + "reactions.ttl", "hr:outer :medium", "hr:place :medium", "host/paper-cell/pyruvate-uptake", "states hr:place"),
    (
        HOST + "reactions.ttl",
        "hr:place :cytosol",
        "hr:outer :cytosol",
        "host/paper-cell/carbonic-anhydrase",
        "no hr:Transport",
    ),
    (
        HOST + "reactions.ttl",
        "r:carbonic-anhydrase",
        "r:carbonic",
        "host/paper-cell/carbonic-anhydrase",
        "reaction/carbonic: no such",
    ),
    (HOST + "reactions.ttl", ":other-feeds", ":never-told", "host/paper-cell/pyruvate-carboxylase", "never-told: no such"),
    (HOST + "reactions.ttl", '[ hr:gene "pupA" ]', '"pupA"', "host/paper-cell/pyruvate-uptake", "wants [ … ]"),
    (HOST + "reactions.ttl", '[ hr:gene "pupA" ]', "[]", "host/paper-cell/pyruvate-uptake", "without hr:gene"),
    (
        HOST + "expression.ttl",
        "hr:feedWithout c:pyruvate",
        "hr:feedWithout c:sugar",
        "host/paper-cell/other-feeds",
        "compound/sugar",
    ),
    (HOST + "expression.ttl", "circ:acid-stress", "circ:stress", "host/paper-cell/other-feeds", "circumstance/stress"),
    (HOST + "numbers.ttl", "unit:mmol-per-gdw-h", "unit:mmol", "host/paper-cell/maintenance", "unit/mmol: no such"),
    (
        HOST + "numbers.ttl",
        "unit:mmol-per-gdw ",
        "unit:mmol-per-gdw-h ",
        "host/paper-cell/biomass-oxaloacetate",
        "building blocks",
    ),
    (HOST + "numbers.ttl", "hr:low 1.2", "hr:low 1.6", "host/paper-cell/maintenance", "1.6"),
    (HOST + "numbers.ttl", "hr:origin hr:assumed", "hr:origin hr:guessed", "host/paper-cell/maintenance", "hr:guessed"),
    (HOST + "numbers.ttl", "hr:about h:paper-cell", "hr:about :nothing", "host/paper-cell/maintenance", "nothing is known of it"),
    (HOST + "numbers.ttl", "k:maintenance", "k:upkeep", "host/paper-cell/maintenance", "kind/upkeep"),
    (HOST + "host.ttl", "hr:role hr:medium", "hr:role hr:organelle", "host/paper-cell", "hr:medium, has 0"),
    (HOST + "host.ttl", "hr:host h:paper-cell", "hr:host h:other", "host/paper-cell/no-oxaloacetate-decarboxylase", "host/other"),
    (HOST + "host.ttl", "hr:taxon obo:NCBITaxon_32644", "hr:taxon obo:Taxon_1", "host/paper-cell", "obo:Taxon_1; accepted"),
    (HOST + "host.ttl", "h:paper-cell a hr:Host", "h:other-cell a hr:Host", "", "stands below no hr:Host"),
    ("routes/all.ttl", "r:carbonic-anhydrase", "r:unheard-of", "route/bicarbonate-from-carbon-dioxide", "reaction/unheard-of"),
    ("routes/all.ttl", '"C4H4O5"', '"C4H4O5.H2O"', "outlet/oxaloacetic-acid", "plain formula"),
    ("ontology/words.ttl", "hr:member c:oxygen", "hr:member c:air", "role/oxygen", "compound/air: no such"),
    ("enzymes/all.ttl", "hr:cofactor c:biotin", "hr:cofactor c:biotine", "enzyme/pyruvate-carboxylase", "compound/biotine"),
]


@pytest.mark.parametrize(("name", "old", "new", "node", "message"), BROKEN)
def test_a_broken_fact_names_file_node_and_what_was_read(
    copy: Path, name: str, old: str, new: str, node: str, message: str
) -> None:
    swap(copy, name, old, new)
    facts, faults = collect(Graph(fact_files([copy])), "v")
    assert facts is None
    assert any(message in fault.message and node in ("", fault.node) and fault.file.endswith(".ttl") for fault in faults), faults
    with pytest.raises(FactsError) as caught:
        load([copy], cache=False)
    assert (caught.value.file, caught.value.node) in {(fault.file, fault.node) for fault in faults}


def test_the_message_counts_the_other_faults(copy: Path) -> None:
    (copy / "sources" / "all.ttl").unlink()
    with pytest.raises(FactsError, match=r"and \d+ more: headrace facts check lists all"):
        load([copy], cache=False)


@pytest.mark.parametrize(
    ("data", "message"),
    [
        (b"@prefix a: <http://x/> .\na:b a a:c\na:d a a:e .", "not valid Turtle, line 3: A dot is expected"),
        (b"\xff\xfe", "Invalid UTF-8"),
        (b"c:x a c:y .", "The prefix c: has not been declared"),
    ],
)
def test_text_that_is_no_turtle(copy: Path, data: bytes, message: str) -> None:
    (copy / "compounds" / "more.ttl").write_bytes(data)
    with pytest.raises(FactsError, match=message) as caught:
        load([copy], cache=False)
    assert caught.value.file == "compounds/more.ttl"


def test_no_folder_and_no_facts(tmp_path: Path) -> None:
    with pytest.raises(FactsError, match="no such folder"):
        load([tmp_path / "none"], cache=False)
    with pytest.raises(FactsError, match="no fact files"):
        load([tmp_path], cache=False)


def test_the_version_knows_content_but_not_order_or_line_endings(copy: Path, tmp_path: Path) -> None:
    files = fact_files([copy])
    whole = version(files)
    assert version(reversed(files)) == whole and len(whole) == 12
    for path in copy.rglob("*.ttl"):
        path.write_bytes(b"\xef\xbb\xbf" + path.read_bytes().replace(b"\n", b"\r\n"))
    assert version(fact_files([copy])) == whole
    assert load([copy], cache=False).version == load([WORLD], cache=False).version == whole
    elsewhere = Path(shutil.copytree(copy, tmp_path / "elsewhere"))
    assert version(fact_files([elsewhere])) == whole
    (elsewhere / "compounds" / "all.ttl").rename(elsewhere / "compounds" / "some.ttl")
    assert version(fact_files([elsewhere])) != whole
    swap(copy, "compounds/all.ttl", '"ADP"', '"adp"')
    assert version(fact_files([copy])) != whole


def test_rules_shapes_and_hidden_files_are_no_facts(copy: Path) -> None:
    whole = version(fact_files([copy]))
    for name in ("rules/exceptions.ttl", "shapes/facts.ttl", ".trash/old.ttl", "compounds/.old.ttl"):
        path = copy / name
        path.parent.mkdir(exist_ok=True)
        path.write_text("not Turtle")
    assert version(fact_files([copy])) == whole


def test_a_plugins_folder_counts_under_its_name(copy: Path, tmp_path: Path) -> None:
    own = tmp_path / "own"
    own.mkdir()
    text = (copy / "compounds" / "all.ttl").read_text()
    (own / "malate.ttl").write_text(
        text[: text.index("c:adp")] + 'c:malate a hr:Compound ; skos:prefLabel "malate"@en ; hr:formula "C4H4O5" ; '
        "hr:charge -2 ; hr:reading hr:seen ; dcterms:source s:paper-sums ."
    )
    facts = load([copy], [("acids", own)], cache=False)
    assert "malate" in facts.compounds and facts.version != load([copy], cache=False).version
    (own / "malate.ttl").write_text((own / "malate.ttl").read_text().replace("C4H4O5", "?"))
    with pytest.raises(FactsError) as caught:
        load([copy], [("acids", own)], cache=False)
    assert caught.value.file == "plugin/acids/malate.ttl"


def test_file_layout_does_not_change_the_facts(copy: Path) -> None:
    before = load([copy], cache=False)
    (copy / "zz.ttl").write_text((copy / "compounds" / "all.ttl").read_text())
    (copy / "compounds" / "all.ttl").unlink()
    after = load([copy], cache=False)
    assert {**_plain(after), "version": ""} == {**_plain(before), "version": ""}


def _plain(facts: Facts) -> dict[str, object]:
    return {name: getattr(facts, name) for name in facts.__struct_fields__}


def test_the_path_from_the_cache_imports_no_rdf_library(tmp_path: Path) -> None:
    code = (
        "import sys, pathlib; from headrace.graph import load; "
        f"facts = load([pathlib.Path({str(WORLD)!r})]); "
        "heavy = {'rdflib', 'pyoxigraph', 'numpy', 'pandas', 'networkx'} & set(sys.modules); "
        "print(len(facts.compounds), sorted(heavy))"
    )
    environment = {"HEADRACE_CACHE": str(tmp_path), "PYTHONPATH": ":".join(sys.path)}
    runs = [
        subprocess.run([sys.executable, "-c", code], env=environment, capture_output=True, text=True, check=True).stdout
        for _ in range(2)
    ]
    assert runs == ["11 ['pyoxigraph']\n", "11 []\n"]
