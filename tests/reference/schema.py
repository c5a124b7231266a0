"""The demos and the published data sets validate against the published schema; mistakes do not.

    python tests/reference/schema.py
"""

import copy
import json
import pathlib

from jsonschema import Draft202012Validator

TOP = pathlib.Path(__file__).resolve().parents[2]
SHEETS = sorted((TOP / "crates/sheet/demos").glob("*.json")) + sorted((TOP / "tests/reference/sheets").glob("*.json"))


def main():
    schema = json.loads((TOP / "crates/sheet/schema/scan-sheet.schema.json").read_text())
    Draft202012Validator.check_schema(schema)
    validator = Draft202012Validator(schema)
    assert len(SHEETS) >= 5, SHEETS
    for path in SHEETS:
        sheet = json.loads(path.read_text())
        errors = list(validator.iter_errors(sheet))
        assert not errors, f"{path.name}: {errors[0].message}"
        unknown = copy.deepcopy(sheet)
        unknown["beam"]["spreed"] = "0.7 MeV"
        bare = copy.deepcopy(sheet)
        bare["model"]["resonances"][0]["width"] = 0.62
        newer = copy.deepcopy(sheet)
        newer["version"] = 2
        for wrong in (unknown, bare, newer):
            assert not validator.is_valid(wrong), path.name
        print(f"{path.name}: valid")


if __name__ == "__main__":
    main()
