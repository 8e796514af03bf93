"""Holds the report against docs/report.schema.json, and sees to it that the schema refuses what it should.

Usage: schema_test.py SCHEMA REPORT
"""
import copy
import json
import sys

import jsonschema

schema = json.load(open(sys.argv[1], encoding="utf-8"))
report = json.load(open(sys.argv[2], encoding="utf-8"))
jsonschema.Draft202012Validator.check_schema(schema)
validator = jsonschema.Draft202012Validator(schema)
validator.validate(report)


def refused(what, spoil):
    broken = copy.deepcopy(report)
    spoil(broken)
    if validator.is_valid(broken):
        sys.exit("the schema takes a report with " + what)


first = ("paths", 0, "findings", 0)


def at(value, keys):
    for key in keys:
        value = value[key]
    return value


refused("another format", lambda r: r.update(format="other"))
refused("no caution", lambda r: r.pop("caution"))
refused("a count below 0", lambda r: r.update(errors=-1))
refused("an unknown setting", lambda r: r["settings"].update(colour=1))
refused("an unknown code", lambda r: at(r, first).update(code="joint-speeds"))
refused("a fraction above 1", lambda r: at(r, first).update(end=1.5))
refused("a quaternion of three", lambda r: at(r, first).update(quaternion=[1, 0, 0]))
refused("an unknown unit", lambda r: at(r, first).update(unit="rad"))
refused("a segment without its samples", lambda r: r["paths"][0]["segments"][0].pop("samples"))
refused("a joint without its name", lambda r: r["paths"][0]["joints"][0].pop("name"))
