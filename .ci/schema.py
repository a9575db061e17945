"""Holds the shipped scenarios and starting files against `lodeshaft schema`.

The program reads its files without the schema, so a validator that knows nothing of the program
says whether the schema tells the truth. Needs Python with `jsonschema` and `PyYAML`.

    python3 .ci/schema.py PROGRAM
"""

import glob
import json
import subprocess
import sys

import jsonschema
import yaml

KINDS = "pump fan wind_turbine tidal_turbine conveyor hoist propeller test_bench coupling".split()


def main() -> int:
    program = sys.argv[1]

    def output(*arguments: str) -> str:
        return subprocess.run([program, *arguments], check=True, capture_output=True, text=True).stdout

    schema = json.loads(output("schema"))
    kind = jsonschema.validators.validator_for(schema)
    kind.check_schema(schema)
    validator = kind(schema)
    files = sorted(glob.glob("scenarios/*.yaml") + glob.glob("tests/accepted/*.yaml"))
    texts = {path: open(path, encoding="utf-8").read() for path in files}
    texts.update({f"new {name}": output("new", name) for name in KINDS})
    # A validator that lets everything pass would prove nothing.
    spoilt = texts[files[0]] + "\nno_such_key: 1\n"
    if validator.is_valid(yaml.safe_load(spoilt)):
        print("an unknown key passes the schema")
        return 1
    faults = 0
    for name, text in texts.items():
        for fault in validator.iter_errors(yaml.safe_load(text)):
            faults += 1
            print(f"{name}: {'.'.join(map(str, fault.path))}: {fault.message[:200]}")
    print(f"{len(texts)} files, {faults} faults")
    return 1 if faults else 0


if __name__ == "__main__":
    sys.exit(main())
