"""Which row of the validation table checks which public routine: covers.json, held against the source.

A public routine of the core, or a request of the sheet, that is in no row is a failure; so is a row that is not in the
table, and a name that is no longer in the source.
"""
import json
import re
from pathlib import Path

HERE = Path(__file__).resolve().parent
ROOT = HERE.parents[1]
FILE = HERE / "covers.json"
NOT_ASSIGNED = "not assigned to a check yet"


def routines():
    """Module -> public functions and methods, by the source; test code left out."""
    source = ROOT / "crates" / "core" / "src"
    found = {}
    for path in sorted(source.rglob("*.rs")):
        text = path.read_text().split("#[cfg(test)]")[0]
        names = sorted(set(re.findall(r"^ *pub (?:const )?fn ([a-z_0-9]+)", text, re.M)))
        if names and path.name != "tests.rs":
            found[str(path.relative_to(source).with_suffix(""))] = names
    return found


def requests():
    text = (ROOT / "www" / "shared" / "generated" / "Request.ts").read_text()
    return sorted(set(re.findall(r'"kind": "([a-z_]+)"', text)))


def there_now():
    return {f"{module}::{name}" for module, names in routines().items() for name in names} | {f"request {kind}" for kind in requests()}


def unassigned():
    return json.loads(FILE.read_text())["rows"].get(NOT_ASSIGNED, [])


def adopt():
    """Puts what is new into the row of what is not assigned yet, takes out what has gone."""
    kept, there = json.loads(FILE.read_text()), there_now()
    rows = {row: [name for name in names if name in there] for row, names in kept["rows"].items()}
    new = there - {name for names in rows.values() for name in names}
    rows[NOT_ASSIGNED] = sorted(set(rows.get(NOT_ASSIGNED, [])) | new)
    FILE.write_text(json.dumps({**kept, "rows": {row: names for row, names in sorted(rows.items()) if names}}, indent=1) + "\n")


def problems(quantities):
    """What is wrong with covers.json, given the quantities of the table."""
    rows, there = json.loads(FILE.read_text())["rows"], there_now()
    covered = [name for names in rows.values() for name in names]
    wrong = [f"{name} is in no row of covers.json" for name in sorted(there - set(covered))]
    wrong += [f"{name} is in covers.json, but not in the source" for name in sorted(set(covered) - there)]
    wrong += [f"{name} is covered twice" for name in sorted({name for name in covered if covered.count(name) > 1})]
    return wrong + [f"covers.json names the row '{row}', which is not in the table" for row in rows if row not in quantities]
