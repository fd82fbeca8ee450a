#!/usr/bin/env python3
"""Compares the simulated board's lines, byte for byte, with the shared vectors,
and its cycles with the table in README.md (within a tenth: another compiler
may do a little better or worse). Usage: check.py BUILD-DIRECTORY"""

import json
import os
import re
import subprocess
import sys

HERE = os.path.dirname(os.path.abspath(__file__))
VECTORS = os.path.join(HERE, "..", "..", "testdata", "protocol", "encode.json")


def main():
    build = sys.argv[1]
    run = subprocess.run([os.path.join(build, "harness"), os.path.join(build, "board.elf")],
                         stdout=subprocess.PIPE, check=True, timeout=60)
    with open(VECTORS, encoding="ascii") as f:
        lines = {v["name"]: v["line"] for v in json.load(f) if "line" in v}
    with open(os.path.join(HERE, "README.md"), encoding="utf-8") as f:
        noted = {m[1]: int(m[2].replace(",", ""))
                 for m in re.finditer(r"(?m)^\| ([^|]+?) \| ([\d,]+) \|", f.read())}
    faults, rows = [], run.stdout.decode().splitlines()
    for row in rows:
        name, cycles, stack, octets = row.split("\t")
        print("%-26s %5s cycles, %s bytes of stack" % (name, cycles, stack))
        line = bytes.fromhex(octets).decode("latin-1")
        if line and line != lines.get(name):
            faults.append("%s: %r, the vector has %r" % (name, line, lines.get(name)))
        if name not in noted:
            faults.append("%s: not in README.md" % name)
        elif abs(int(cycles) - noted[name]) > noted[name] / 10:
            faults.append("%s: %s cycles, README.md says %d" % (name, cycles, noted[name]))
    if len(rows) < 7:
        faults.append("only %d lines measured" % len(rows))
    for fault in faults:
        print(fault, file=sys.stderr)
    return 1 if faults else 0


if __name__ == "__main__":
    sys.exit(main())
