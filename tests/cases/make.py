"""Writes published.json: the facts of the catalogue of published models that tests need, in a compact form.

Run:  python3 make.py CATALOGUE.json
The catalogue is a file of open cases; nothing else is needed, and the same catalogue always gives the same
bytes. Prose that no test reads (notes, tags, groups) is left out; a key that is not known here is an error, so that
nothing is lost unseen. Numbers stay decimal strings. What differs from the catalogue: `equations`, `box`, `x` and
`jacobian` are lists in species order, an eigenvalue is its real part where it is real and [re, im] where not,
`counts` is [stable, unstable, neutral], `decided_by` stands only where it is not the eigenvalues, and what is null or
empty is left out.
"""

import json
import sys
from pathlib import Path

COPIED = ["id", "name", "citation", "provenance", "time", "species", "parameters"]
FACTS = [
    "completeness", "min_separation", "continua", "thresholds", "yields", "transients", "press", "cycles", "demography",
    "characteristic_polynomial", "routh_array", "printed_values",
]
DROPPED = {"set", "group", "n_equilibria", "notes", "tags"}
REWRITTEN = {"parameters_exact", "equations", "search_box", "equilibria", "scenarios"}
EQUILIBRIUM_FACTS = ["linear_type", "stability", "multiplicity", "first_lyapunov", "bogdanov_takens", "neimark_sacker_d", "flip_c"]


def known(what, found, *expected):
    extra = set(found) - set().union(*expected)
    if extra:
        sys.exit(f"{what} has keys that make.py does not know: {sorted(extra)}")


def there(value):
    return value is not None and value != [] and value != {} and value != ""


def without_empty(value):
    """The value with nulls and empty things inside it left out."""
    if isinstance(value, dict):
        return {key: without_empty(item) for key, item in value.items() if there(item)}
    return [without_empty(item) for item in value] if isinstance(value, list) else value


def in_order(values, species, what):
    if set(values) != set(species):
        sys.exit(f"{what}: {sorted(values)} for the species {species}")
    return [values[symbol] for symbol in species]


def eigenvalue(value):
    known("an eigenvalue", value, {"re", "im"})
    return value["re"] if value["im"] == "0" else [value["re"], value["im"]]


def equilibrium(found, species, what):
    known(what, found, EQUILIBRIUM_FACTS, {"x", "jacobian", "eigenvalues", "counts", "decided_by", "location", "yields"})
    made = {"x": in_order(found["x"], species, what)}
    if "jacobian" in found:
        made["jacobian"] = found["jacobian"]
    made["eigenvalues"] = [eigenvalue(value) for value in found["eigenvalues"]]
    made["counts"] = in_order(found["counts"], ["stable", "unstable", "neutral"], what)
    if sum(made["counts"]) != len(species) or len(made["eigenvalues"]) != len(species):
        sys.exit(f"{what}: eigenvalues do not add up")
    made |= {key: found[key] for key in EQUILIBRIUM_FACTS if key in found}
    if found["decided_by"] != "eigenvalues":
        made["decided_by"] = found["decided_by"]
    return made | ({"yields": found["yields"]} if found.get("yields") else {})


def scenario(found, species, what):
    known(what, found, {"name", "override", "yield_expressions", "equilibria", "note"})
    made = {"name": found["name"], "override": found["override"], "yield_expressions": found["yield_expressions"]}
    made = {key: value for key, value in made.items() if there(value)}
    return made | {"equilibria": [equilibrium(e, species, f"{what}, {found['name']}") for e in found["equilibria"]]}


def case(found):
    known(found["id"], found, COPIED, FACTS, DROPPED, REWRITTEN)
    species = found["species"]
    made = {key: found[key] for key in COPIED if there(found[key])}
    # Where a closed form stands behind a parameter, its many digits.
    known(found["id"], found["parameters_exact"], found["parameters"])
    made["parameters"] = found["parameters"] | found["parameters_exact"]
    made["equations"] = in_order(found["equations"], species, found["id"])
    made["box"] = in_order(found["search_box"], species, found["id"])
    if found["n_equilibria"] != len(found["equilibria"]):
        sys.exit(f"{found['id']}: not {found['n_equilibria']} equilibria")
    made["equilibria"] = [equilibrium(e, species, found["id"]) for e in found["equilibria"]]
    made |= {key: without_empty(found[key]) for key in FACTS if there(found.get(key))}
    if found.get("scenarios"):
        made["scenarios"] = [scenario(s, species, found["id"]) for s in found["scenarios"]]
    return made


def compact(value):
    return json.dumps(value, ensure_ascii=False, separators=(",", ":"))


def lines(value, depth):
    """JSON with a line for each entry of a case, and for each of its equilibria and scenarios."""
    indent = " " * depth
    if isinstance(value, dict) and "species" in value or isinstance(value, dict) and depth == 0:
        inner = [f"{indent} {compact(key)}:{lines(item, depth + 1)}" for key, item in value.items()]
        return "{\n" + ",\n".join(inner) + "\n" + indent + "}"
    if isinstance(value, list) and value and isinstance(value[0], dict):
        inner = [f"{indent} {lines(item, depth + 1)}" for item in value]
        return "[\n" + ",\n".join(inner) + "\n" + indent + "]"
    return compact(value)


def main():
    if len(sys.argv) != 2:
        sys.exit(__doc__)
    catalogue = json.loads(Path(sys.argv[1]).read_text(encoding="utf-8"))
    made = {
        "about": "Published and textbook models with all their equilibria; made by make.py, see README.md.",
        "provenance_words": catalogue["provenance_words"],
        "suggested_tolerances": catalogue["suggested_tolerances"],
        "criteria": [{k: v for k, v in criterion.items() if k != "set"} for criterion in catalogue["criteria"]],
        "cases": [case(found) for found in catalogue["cases"]],
    }
    Path(__file__).with_name("published.json").write_text(lines(made, 0) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
