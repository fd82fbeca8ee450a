"""Encode vectors: fields, and the one line that a device sends for them."""

from wire import beat, btn, chan, did, echo, here, line, note, note_of, unknown, val


def sent(name, clauses, record, body):
    return {"name": name, "clauses": clauses, "record": record, "line": line(body)}


def cannot(name, clauses, record, cls):
    """Fields that no line can carry."""
    return {"name": name, "clauses": clauses, "record": record, "class": cls}


def wont(token, verb, why):
    return {"word": "wont", "token": token, "verb": verb, "why": why}


LONG = dict(channel="q", quantity="torque", unit="[ft_i].[lbf_av]", mantissa=-9999999, exponent=-12,
            lo=-9999999, hi=9999999, per=9999999, shows="rounded", face="A")
LONG_BODY = ("chan q torque [ft_i].[lbf_av] -9999999e-12 lo=-9999999 hi=9999999 per=9999999 "
             "shows=rounded face=A sn=")
assert len(line(LONG_BODY + "abcdefghijkl")) == 120


def vectors():
    return good_vals() + good_declarations() + good_others() + bad()


def good_vals():
    return [
        sent("val of the longest line", ["5.3", "3.1", "3.2"],
             val("a", 65535, 4294967295, "g", -9999999), "val a ffff ffffffff g -9999999"),
        sent("val of a usual line", ["5.3"], val("a", 200, 1234567, "g", 7240),
             "val a 00c8 0012d687 g 7240"),
        sent("val without a count", ["5.3", "6.5"], val("b", 201, 1234667, "x"),
             "val b 00c9 0012d6eb x"),
        sent("val with a fault", ["5.3"], val("b", 202, 1234767, "f"), "val b 00ca 0012d74f f"),
        sent("val low", ["5.3"], val("c", 0, 0, "l", -200), "val c 0000 00000000 l -200"),
        sent("val high", ["5.3"], val("z", 1, 16, "h", 15200), "val z 0001 00000010 h 15200"),
        sent("val zero", ["5.3", "1.4"], val("a", 0, 0, "g", 0), "val a 0000 00000000 g 0"),
    ] + [sent("val of count %d" % n, ["3.1"], val("a", 1, 2, "g", n), "val a 0001 00000002 g " + t)
         for n, t in ((1, "1"), (9, "9"), (10, "10"), (99, "99"), (100, "100"), (1000, "1000"),
                      (10000, "10000"), (100000, "100000"), (1000000, "1000000"),
                      (9999999, "9999999"), (5000005, "5000005"), (-1, "-1"), (-10, "-10"),
                      (-1000000, "-1000000"), (-7654321, "-7654321"))]


def good_declarations():
    return [
        sent("here", ["5.1"], here("two-port", "0007", 1000000, 2, 123456, "rest", "power", 42),
             "here 1 two-port 0007 hz=1000000 ch=2 up=0001e240 state=rest why=power boot=0000002a"),
        sent("here without a boot id", ["5.1", "4.8"],
             here("two-port", "0007", 1000000, 2, 250000, "run", "asked"),
             "here 1 two-port 0007 hz=1000000 ch=2 up=0003d090 state=run why=asked"),
        sent("here with boot id zero", ["5.1", "4.8"], here("m", "s", 1, 0, 0, "rest", "brown", 0),
             "here 1 m s hz=1 ch=0 up=00000000 state=rest why=brown boot=00000000"),
        sent("chan with defaults left out", ["5.2"],
             chan("a", "pressure", "[psi]", 1, -1, -200, 15200, 10000),
             "chan a pressure [psi] 1e-1 lo=-200 hi=15200 per=10000"),
        sent("chan with everything", ["5.2", "6.4", "6.6"],
             chan("b", "extension", "[in_i]", 5, -5, -1000, 19000, 100000, res=2, zero=-7,
                  shows="truncated", face="B", span=2, sn="E-77"),
             "chan b extension [in_i] 5e-5 lo=-1000 hi=19000 per=100000 res=2 zero=-7 "
             "shows=truncated face=B span=2 sn=E-77"),
        sent("chan with a negative scale", ["3.4"],
             chan("t", "temperature", "[degF]", -25, -3, -5, 5, 1),
             "chan t temperature [degF] -25e-3 lo=-5 hi=5 per=1"),
        sent("chan of exactly 120 bytes", ["2.3", "5.2"], chan(**{**LONG, "sn": "abcdefghijkl"}),
             LONG_BODY + "abcdefghijkl"),
    ]


def good_others():
    return [
        sent("button down", ["5.4"], btn(1, 3, 535040, "down"), "btn 1 0003 00082a00 down"),
        sent("button up", ["5.4"], btn(9, 4, 539136, "up"), "btn 9 0004 00083a00 up"),
        sent("beat", ["5.5"], beat(5, 1000000, 2, 255), "beat 0005 000f4240 00000002 000000ff"),
        sent("did who", ["5.6"], did(1, "who"), "did 01 who"),
        sent("did run", ["5.6"], did(255, "run"), "did ff run"),
        sent("did rest", ["5.6"], did(16, "rest"), "did 10 rest"),
        sent("did pace", ["5.6"], did(0, "pace"), "did 00 pace"),
        sent("wont", ["5.7"], wont(10, "jump", "unknown"), "wont 0a jump unknown"),
        sent("echo", ["5.8"], echo(3, 500000), "echo 03 0007a120"),
        sent("note", ["5.9"], note("oil 21 C  "), "note oil 21 C  "),
        sent("note of exactly 120 bytes", ["2.3"], note(note_of(120)[5:-6]), note_of(120)[:-6]),
        sent("unknown record", ["5.10"], unknown("moon", "moon full"), "moon full"),
        sent("unknown record, word alone", ["5.10"], unknown("moon", "moon"), "moon"),
    ]


def bad():
    h = dict(model="m", serial="s", hz=5, ch=1, up=1, state="rest", why="asked")
    c = dict(channel="a", quantity="force", unit="N", mantissa=1, exponent=0, lo=0, hi=1, per=1)
    return [
        cannot("val of eight digits", ["3.1"], val("a", 1, 2, "g", 10000000), "bad-number"),
        cannot("val of eight digits, negative", ["3.1"], val("a", 1, 2, "g", -10000000), "bad-number"),
        cannot("val good without a count", ["5.3"], val("a", 1, 2, "g"), "bad-shape"),
        cannot("val absent with a count", ["5.3"], val("a", 1, 2, "x", 5), "bad-shape"),
        cannot("val of channel A", ["3.5"], val("A", 1, 2, "g", 5), "bad-word"),
        cannot("val of status q", ["5.3"], val("a", 1, 2, "q", 5), "bad-word"),
        cannot("btn 0", ["3.5"], btn(0, 1, 2, "up"), "bad-word"),
        cannot("here without ticks", ["5.1"], here(**{**h, "hz": 0}), "out-of-bounds"),
        cannot("here too fast", ["5.1"], here(**{**h, "hz": 1000001}), "out-of-bounds"),
        cannot("here of 27 channels", ["5.1"], here(**{**h, "ch": 27}), "out-of-bounds"),
        cannot("here of version 0", ["5.1"], here(**{**h, "version": 0}), "out-of-bounds"),
        cannot("here with a space in a name", ["3.3"], here(**{**h, "model": "a b"}), "bad-shape"),
        cannot("here with an empty name", ["3.3", "2.7"], here(**{**h, "serial": ""}), "bad-shape"),
        cannot("here with a long name", ["3.3"], here(**{**h, "serial": "s" * 17}), "bad-word"),
        cannot("here with a cause that is none", ["5.1"], here(**{**h, "why": "magic"}), "bad-word"),
        cannot("chan of a quantity that is none", ["6.1"], chan(**{**c, "quantity": "speed"}),
               "bad-word"),
        cannot("chan of a wrong unit", ["6.2"], chan(**{**c, "unit": "mm"}), "bad-word"),
        cannot("chan of scale zero", ["3.4"], chan(**{**c, "mantissa": 0}), "out-of-bounds"),
        cannot("chan of scale of eight digits", ["3.4"], chan(**{**c, "mantissa": 10000000}),
               "bad-number"),
        cannot("chan of exponent 13", ["3.4"], chan(**{**c, "exponent": 13}), "out-of-bounds"),
        cannot("chan with lo at hi", ["5.2"], chan(**{**c, "lo": 1}), "out-of-bounds"),
        cannot("chan without a period", ["5.2"], chan(**{**c, "per": 0}), "out-of-bounds"),
        cannot("chan without a least step", ["5.2"], chan(**{**c, "res": 0}), "out-of-bounds"),
        cannot("chan of face C", ["3.5"], chan(**{**c, "face": "C"}), "bad-word"),
        cannot("chan of span 3", ["3.5"], chan(**{**c, "span": 3}), "bad-word"),
        cannot("chan with a second key in a name", ["3.3"], chan(**{**c, "sn": "q zz=1"}),
               "bad-shape"),
        cannot("chan of 121 bytes", ["2.3"], chan(**{**LONG, "sn": "abcdefghijklm"}), "too-long"),
        cannot("did echo", ["5.6"], did(1, "echo"), "bad-word"),
        cannot("wont with a space in why", ["5.7"], wont(1, "run", "too busy"), "bad-shape"),
        cannot("wont with an upper-case verb", ["2.8"], wont(1, "RUN", "busy"), "bad-word"),
        cannot("note of nothing", ["5.9"], note(""), "bad-shape"),
        cannot("note with a separator", ["2.5"], note("a;b"), "no-check"),
        cannot("note with a line end", ["2.1"], note("a\nb"), "bad-byte"),
        cannot("note with a byte of 0x80", ["2.1"], note("a\x80b"), "bad-byte"),
        cannot("note of 121 bytes", ["2.3"], note(note_of(121)[5:-6]), "too-long"),
        cannot("unknown record with a known word", ["5.10"], unknown("val", "val a"), "bad-shape"),
        cannot("unknown record with another word in its body", ["5.10"],
               unknown("moon", "sun full"), "bad-shape"),
        cannot("unknown record with no word", ["2.8"], unknown("", ""), "bad-word"),
    ]
