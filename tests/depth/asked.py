"""Random questions over the shipped facts, for the tests of this folder."""

from __future__ import annotations

import random
from typing import Any

FEEDS = {
    "escherichia-coli": ("glucose", "glycerol", "acetate", "succinate", "gluconate", "pyruvate"),
    "corynebacterium-glutamicum": ("glucose", "acetate", "L-lactate", "pyruvate", "citrate"),
    "saccharomyces-cerevisiae": ("glucose", "ethanol", "galactose", "acetate"),
    "yarrowia-lipolytica": ("glucose", "glycerol", "citrate", "acetate"),
}
OUTLETS = ("L-glutamate", "L-lysine", "L-aspartate", "L-threonine", "L-arginine", "L-proline", "uridylate", "heme b", "succinate",
           "citrate")


def question(rng: random.Random, host: str = "", **aim: Any) -> dict[str, Any]:
    """A scenario as plain data: host, feeds, growth, outlets, sometimes with stated uptake, limits or without oxygen."""
    host = host or rng.choice(sorted(FEEDS))
    outlets = rng.sample(OUTLETS, rng.choice([1, 1, 2]))
    found: dict[str, Any] = {
        "title": "random", "host": host, "growth": f"{rng.choice([0, 0.02, 0.05, 0.1])} /h",
        "feed": [{"substrate": s} for s in rng.sample(FEEDS[host], rng.choice([1, 1, 2]))],
        "conditions": {"oxygen": rng.choice(["aerobic", "aerobic", "aerobic", "anaerobic"]),
                       "supplements": ["biotin"] if host.startswith("coryne") else []},
        "outlet": [{"product": p, "rate": f"{rng.uniform(0.01, 0.5):.4f} mmol/gDW/h"} for p in outlets],
        "aim": {"expression": rng.choice(["as expressed", "open"])} | aim,
    }
    if rng.random() < 0.3:
        for feed in found["feed"]:
            feed["uptake"] = f"{rng.choice([1, 3, 8])} mmol/gDW/h"
    return found
