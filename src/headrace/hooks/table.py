"""The plugins that ship with Headrace, written by `python -m headrace.hooks`; a test compares both."""

from __future__ import annotations

from headrace.hooks.entry import Entry

FIRST_PARTY: tuple[Entry, ...] = (
    Entry(
        name="dependence",
        module="headrace_plugins.checks.dependence",
        attribute="Dependence",
        summary="Which refills, cofactors and unconfirmed facts a design can't do without.",
        hooks=("checks",),
        families=(),
    ),
    Entry(
        name="aspartate-family",
        module="headrace_plugins.drains.aspartate_family",
        attribute="AspartateFamily",
        summary="Aspartate, asparagine, lysine by either route, threonine, methionine, isoleucine, homoserine, ectoine, beta-alanine.",
        hooks=("drains",),
        families=("aspartate-family",),
    ),
    Entry(
        name="biomass",
        module="headrace_plugins.drains.biomass",
        attribute="Biomass",
        summary="What growth takes, from the biomass composition of the host.",
        hooks=("drains",),
        families=("biomass",),
    ),
    Entry(
        name="glutamate-family",
        module="headrace_plugins.drains.glutamate_family",
        attribute="GlutamateFamily",
        summary="Glutamate, glutamine, proline, arginine, ornithine, putrescine and 4-aminobutanoate.",
        hooks=("drains",),
        families=("glutamate-family",),
    ),
    Entry(
        name="lipids",
        module="headrace_plugins.drains.lipids",
        attribute="Lipids",
        summary="Fatty acids, esters, triacylglycerol and phospholipids, by chain length and saturation.",
        hooks=("drains",),
        families=("lipids", "lipid-mixtures"),
    ),
    Entry(
        name="nucleotides",
        module="headrace_plugins.drains.nucleotides",
        attribute="Nucleotides",
        summary="Purine and pyrimidine nucleotides, and RNA and DNA by composition.",
        hooks=("drains",),
        families=("nucleotides", "nucleic-acids"),
    ),
    Entry(
        name="organic-acids",
        module="headrace_plugins.drains.organic_acids",
        attribute="OrganicAcids",
        summary="Succinate, malate, fumarate, citrate, isocitrate, itaconate and 2-oxoglutarate.",
        hooks=("drains",),
        families=("organic-acids",),
    ),
    Entry(
        name="other-amino-acids",
        module="headrace_plugins.drains.other_amino_acids",
        attribute="OtherAminoAcids",
        summary="Amino acids from pyruvate, 3-phosphoglycerate, PEP and sugar phosphates.",
        hooks=("drains",),
        families=("pyruvate-family", "serine-family", "aromatic-family"),
    ),
    Entry(
        name="porphyrins",
        module="headrace_plugins.drains.porphyrins",
        attribute="Porphyrins",
        summary="5-Aminolevulinate, heme b, siroheme, protoporphyrin IX and chlorophyll a, from succinyl-CoA or from glutamate.",
        hooks=("drains",),
        families=("porphyrins",),
    ),
    Entry(
        name="sterols",
        module="headrace_plugins.drains.sterols",
        attribute="Sterols",
        summary="Squalene, ergosterol, cholesterol and carotenoids, by the isopentenyl diphosphate route of the host.",
        hooks=("drains",),
        families=("sterols", "isoprenoids"),
    ),
    Entry(
        name="whole-network",
        module="headrace_plugins.refills.whole_network",
        attribute="WholeNetwork",
        summary="Requirement of each refill from the host's whole network: least feed carbon, then least total rate.",
        hooks=("refills",),
        families=(),
    ),
    Entry(
        name="review",
        module="headrace_plugins.reports.review",
        attribute="Review",
        summary="The design-review document as Markdown, with its tables as CSV.",
        hooks=("report",),
        families=(),
    ),
)
