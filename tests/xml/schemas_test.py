#!/usr/bin/env python3
"""The schemas in docs/ against the fixtures, the examples in docs/formats.md and the reader.

Usage: schemas_test.py PROGRAM SOURCE_DIR. Needs xmllint (Debian: libxml2-utils).
Every fixture is valid; every complete example of docs/formats.md is valid and is read; and whatever a schema rejects, the
reader rejects too (random mutants of the fixtures, fixed seed; PATHVET_SEED takes another).
"""
import os
import pathlib
import random
import re
import subprocess
import sys
import tempfile

program, source = sys.argv[1], pathlib.Path(sys.argv[2])
schemas = {"cell": source / "docs/cell.xsd", "path": source / "docs/path.xsd"}
cells = sorted((source / "fixtures/cells").glob("*.xml"))
paths = sorted(p for p in (source / "fixtures/paths").glob("*.xml") if p.stat().st_size < 20000)
seed = os.environ.get("PATHVET_SEED", "schemas")
print("seed", seed)
mutants_a_file = 12
failures = 0


def fail(what):
    global failures
    failures += 1
    print("FAILED:", what)


def valid(kind, file):
    return subprocess.run(["xmllint", "--noout", "--schema", schemas[kind], file], capture_output=True).returncode == 0


def check(path, cell):
    return subprocess.run([program, "check", path, "--cell", cell, "--quiet"], capture_output=True, text=True)


def mutant(text, rng):
    """One thing in the markup changed: an attribute dropped, renamed or doubled in value, a tag renamed or dropped."""
    attributes = list(re.finditer(r'\s([a-z-]+)="([^"]*)"', text))
    kind = rng.choice(["drop", "rename", "word", "empty", "tag", "unknown"])
    if kind in ("drop", "rename", "word", "empty"):
        a = rng.choice([m for m in attributes if m.start() > text.index("?>")])
        new = {
            "drop": "",
            "rename": f' {a[1]}x="{a[2]}"',
            "word": f' {a[1]}="{a[2]} nonsense"',
            "empty": f' {a[1]}=""',
        }[kind]
        return text[: a.start()] + new + text[a.end() :]
    tags = [m for m in re.finditer(r"<([a-z-]+)([^<>]*)/>", text)]
    if not tags:
        return text.replace("<joints>", "<angles>", 1)
    t = rng.choice(tags)
    if kind == "tag":
        return text[: t.start()] + text[t.end() :]
    return text[: t.end()] + "<surprise/>" + text[t.end() :]


cell_of = {}
for p in paths:
    named = re.search(r'\scell="([^"]+)"', p.read_text())[1]
    cell_of[p] = (p.parent / named).resolve()
for file in cells:
    if not valid("cell", file):
        fail(f"{file.name} is not valid")
for file in sorted((source / "fixtures/paths").glob("*.xml")):
    if not valid("path", file):
        fail(f"{file.name} is not valid")

with tempfile.TemporaryDirectory() as folder:
    folder = pathlib.Path(folder)
    blocks = re.findall(r"```xml\n(.*?)```", (source / "docs/formats.md").read_text(), re.S)
    examples = {}
    for block in blocks:
        for kind in ("cell", "path"):
            if re.search(rf"<{kind} version", block) and f"</{kind}>" in block:
                examples[kind] = block
    if set(examples) != {"cell", "path"}:
        fail("docs/formats.md shows no complete cell and path")
    else:
        for kind, text in examples.items():
            (folder / f"{kind}.xml").write_text(text)
            if not valid(kind, folder / f"{kind}.xml"):
                fail(f"the {kind} of docs/formats.md is not valid")
        answer = check(folder / "path.xml", folder / "cell.xml")
        if answer.returncode not in (0, 1):
            fail("the example of docs/formats.md is not read:\n" + answer.stderr)

    rejected = 0
    for kind, files in (("cell", cells), ("path", paths)):
        for file in files:
            rng = random.Random(f"{seed} {file.name}")
            for _ in range(mutants_a_file):
                text = mutant(file.read_text(), rng)
                changed = folder / "mutant.xml"
                changed.write_text(text)
                if valid(kind, changed):
                    continue
                rejected += 1
                if kind == "path":
                    answer = check(changed, cell_of[file])
                else:
                    user = next((p for p in paths if cell_of[p] == file.resolve()), paths[0])
                    answer = check(user, changed)
                if answer.returncode != 2:
                    fail(f"the schema rejects a mutant of {file.name} that is read:\n{text}")
    print(rejected, "mutants were rejected by a schema")
    if rejected < 100:
        fail("too few mutants to say anything")
sys.exit(failures > 0)
