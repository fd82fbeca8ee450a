#!/usr/bin/env python3
"""Writes the vectors of the wire, version 1, from protocol/SPEC.md alone.

    python3 make_vectors.py           write the files beside this script
    python3 make_vectors.py --check   compare them; exit 1 when they differ

Python 3, standard library only. Bodies and expected fields are written out by
hand, one beside the other; nothing here reads or runs the program's own code.
The check sum is computed by polynomial division of one large integer, which is
another way than the program's.

In the files every character of a "stream" or "line" string is one byte, 0 to
255; line ends are escapes, so that no conversion of newlines can harm them.
Files: decode.json (bytes a device sent -> records or refusals), encode.json
(fields -> the bytes a device sends), commands.json (fields <-> bytes of the
host), values.json (declaration and count -> SI value).
"""

import json
import os
import sys

sys.dont_write_bytecode = True  # leave no __pycache__ beside the vectors

import vectors_commands
import vectors_decode
import vectors_encode
import vectors_values

FILES = {
    "decode.json": vectors_decode.vectors,
    "encode.json": vectors_encode.vectors,
    "commands.json": vectors_commands.vectors,
    "values.json": vectors_values.vectors,
}


def text(vectors):
    names = [v["name"] for v in vectors]
    twice = {n for n in names if names.count(n) > 1}
    assert not twice, twice
    rows = ",\n".join(json.dumps(v, ensure_ascii=True) for v in vectors)
    return ("[\n" + rows + "\n]\n").encode("ascii")


def main():
    here = os.path.dirname(os.path.abspath(__file__))
    check = sys.argv[1:] == ["--check"]
    stale = False
    for name, vectors in FILES.items():
        path, want = os.path.join(here, name), text(vectors())
        if not check:
            with open(path, "wb") as f:
                f.write(want)
            continue
        with open(path, "rb") as f:
            if f.read() != want:
                print(name, "is not what make_vectors.py writes", file=sys.stderr)
                stale = True
    return 1 if stale else 0


if __name__ == "__main__":
    sys.exit(main())
