"""Drives the core through the pipe of desk.c. Standard library only."""

import json
import os
import subprocess

HERE = os.path.dirname(os.path.abspath(__file__))
VECTORS = os.path.join(HERE, "..", "..", "..", "testdata", "protocol")

SHEET = "here 1 two-port 0007 hz=1000000 ch={count} up={{now}} state={{state}} why={{cause}}"
CHANNELS = [
    ("-200 15200 10000 1000", "pressure [psi] 1e-1 lo=-200 hi=15200 per={per} sn=P-118"),
    ("-1000 19000 100000 0", "extension [in_i] 5e-5 lo=-1000 hi=19000 per={per} shows=rounded"),
]


def vectors(name):
    with open(os.path.join(VECTORS, name), encoding="ascii") as f:
        return json.load(f)


def octets(text):
    """A string of the vectors: each character is one byte."""
    return text.encode("latin-1")


def check(body):
    """CRC-16/CCITT-FALSE, bit by bit: another way than the core's."""
    crc = 0xFFFF
    for byte in body:
        for bit in range(7, -1, -1):
            top = (crc >> 15) ^ (byte >> bit & 1)
            crc = (crc << 1 & 0xFFFF) ^ (0x1021 if top else 0)
    return b"%04x" % crc


def sealed(body):
    body = body if isinstance(body, bytes) else body.encode("ascii")
    return body + b";" + check(body) + b"\n"


class Desk:
    """One run of the program. Every method returns the bytes the board sent."""

    def __init__(self, program):
        self.process = subprocess.Popen([program], stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True)

    def __enter__(self):
        return self

    def __exit__(self, *_):
        self.process.stdin.close()
        code = self.process.wait()
        self.process.stdout.close()
        assert code == 0, f"the core's program ended with {code}"

    def raw(self, order):
        self.process.stdin.write(order + "\n")
        self.process.stdin.flush()
        answer = self.process.stdout.readline()
        assert answer.endswith("\n"), f"the core's program died at {order[:60]!r}"
        return answer[:-1]

    def do(self, order):
        return bytes.fromhex(self.raw(order))

    def board(self, channels=CHANNELS):
        """Declares the sheet, not yet booted."""
        self.do("here " + SHEET.format(count=len(channels)))
        for i, (numbers, text) in enumerate(channels):
            self.do(f"chan {numbers} chan {chr(97 + i)} {text}")

    def boot(self, cause=2, running=0, channels=CHANNELS, tick=0):
        self.board(channels)
        self.do("id 42")
        self.do(f"tick {tick}")
        return self.do(f"boot {cause} {running}") + self.do("poll")

    def hear(self, line):
        return self.do("hear " + line.hex()) + self.do("poll")

    def command(self, body):
        return self.hear(sealed(body))


def records(stream):
    """The bodies of whole lines with a good check, split into fields; a bad line is
    an error here."""
    lines = stream.split(b"\n")
    assert lines.pop() == b"", "a line without its end"
    out = []
    for line in lines:
        if not line:
            continue
        body, _, digits = line.rpartition(b";")
        assert check(body) == digits, line
        assert len(line) < 120, line
        out.append(body.decode("ascii").split(" "))
    return out
