"""Documents against the shipped JSON Schema (validator: python3-jsonschema), and copies of them
damaged in one place each, which must be refused."""
import copy
import json
import sys

import jsonschema

schema = json.load(open(sys.argv[1]))
jsonschema.Draft202012Validator.check_schema(schema)
validator = jsonschema.Draft202012Validator(schema)

DAMAGE = [
    ("a member too few", lambda d: d.pop("mixture")),
    ("a member too many", lambda d: d.update(extra=1)),
    ("text for a number", lambda d: d["generator"].update(kV="40")),
    ("another version of the schema", lambda d: d.update(schema="beamhour/2")),
    ("an unknown member in a row", lambda d: d["reflections"][0].update(colour="red")),
    ("a row without its angle", lambda d: d["reflections"][0].pop("two_theta")),
]
PLAN_DAMAGE = [
    ("an unknown mode", lambda d: d["ranges"][0].update(mode="flying")),
    ("an unknown severity", lambda d: d["findings"][0].update(severity="bad")),
    ("a null that is no number", lambda d: d["time"].update(total=None)),
]

for name in sys.argv[2:]:
    document = json.load(open(name))
    for error in validator.iter_errors(document):
        print(name, error.message[:200])
    damages = DAMAGE + ([] if "time" not in document or not document["findings"] else PLAN_DAMAGE)
    for what, damage in damages:
        broken = copy.deepcopy(document)
        damage(broken)
        if validator.is_valid(broken):
            print(name, "is valid with", what)
