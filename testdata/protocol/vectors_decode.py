"""Decode vectors: what a device sent, and what a reader must make of it."""

from wire import (beat, btn, chan, did, echo, here, line, note, note_of, spoiled, stream,
                  unknown, val, wont)

GOOD = (line("val a 0001 00000002 g 5"), val("a", 1, 2, "g", 5))


def after(name, clauses, text, cls, clause):
    """A refused line between two good ones: nobody else may be harmed (8.3)."""
    return stream(name, clauses, GOOD, (text, (cls, clause)), GOOD)


def refused(name, body, cls, clause):
    """A refused body in a good frame."""
    return after(name, [clause], line(body), cls, clause)


def vectors():
    return frames() + numbers() + heres() + chans() + vals() + others() + orders() + streams()


def frames():
    longest = note_of(120)
    crlf = note_of(120, "\r\n")
    return [
        stream("one good line", ["1.1", "1.2", "2.6"], GOOD),
        stream("nothing at all", ["2.2"]),
        stream("every printable byte but the separator", ["2.1", "5.9"],
               (line("note  !\"#$%&'()*+,-./0123456789:<=>?@"),
                note(" !\"#$%&'()*+,-./0123456789:<=>?@")),
               (line("note ABCDEFGHIJKLMNOPQRSTUVWXYZ[\\]^_`abcdefghijklmnopqrstuvwxyz{|}~"),
                note("ABCDEFGHIJKLMNOPQRSTUVWXYZ[\\]^_`abcdefghijklmnopqrstuvwxyz{|}~"))),
        after("a NUL byte", ["2.1"], line("note a\x00b"), "bad-byte", "2.1"),
        after("a tab", ["2.1"], line("note a\tb"), "bad-byte", "2.1"),
        after("byte 0x1f", ["2.1"], line("note a\x1fb"), "bad-byte", "2.1"),
        after("byte 0x7f", ["2.1"], line("note a\x7fb"), "bad-byte", "2.1"),
        after("byte 0x80", ["2.1"], line("note a\x80b"), "bad-byte", "2.1"),
        after("byte 0xff", ["2.1"], line("note a\xffb"), "bad-byte", "2.1"),
        after("a bad byte in the check", ["2.1"], "note a;12\x003\n", "bad-byte", "2.1"),
        stream("a CR before LF is ignored", ["2.2"],
               (line("echo 01 00000002", "\r\n"), echo(1, 2)), GOOD),
        after("two CR before LF", ["2.2", "2.1"], line("echo 01 00000002", "\r\r\n"),
              "bad-byte", "2.1"),
        after("a CR inside the line", ["2.2", "2.1"], line("echo 01\r00000002"), "bad-byte", "2.1"),
        stream("CR alone does not end a line", ["2.2", "2.1"],
               (line("echo 01 00000002", "\r") + line("echo 01 00000002"), ("bad-byte", "2.1"))),
        stream("the stream ends inside a line", ["2.2"], GOOD,
               (line("val a 0001 00000002 g 5", ""), ("unfinished", "2.2"))),
        stream("the stream ends after CR", ["2.2"], GOOD,
               (line("val a 0001 00000002 g 5", "\r"), ("unfinished", "2.2"))),
        stream("the stream ends after one byte", ["2.2"], ("v", ("unfinished", "2.2"))),
        stream("the stream ends with a bad byte and no LF", ["2.2"],
               ("val\x00", ("unfinished", "2.2"))),
        stream("exactly 120 bytes", ["2.3"], (longest, note(longest[5:-6])), GOOD),
        stream("exactly 120 bytes with CR", ["2.3", "2.2"], (crlf, note(crlf[5:-7])), GOOD),
        after("121 bytes", ["2.3"], note_of(121), "too-long", "2.3"),
        after("121 bytes with CR", ["2.3"], note_of(121, "\r\n"), "too-long", "2.3"),
        after("a thousand bytes", ["2.3"], "x" * 999 + "\n", "too-long", "2.3"),
        stream("119 bytes and no LF", ["2.3", "2.2"], GOOD, ("x" * 119, ("unfinished", "2.2"))),
        stream("120 bytes and no LF", ["2.3"], GOOD, ("x" * 120, ("too-long", "2.3"))),
        after("no separator", ["2.5"], "val a 0001 00000002 g 5\n", "no-check", "2.5"),
        after("check missing", ["2.5"], "val a 0001 00000002 g 5;\n", "no-check", "2.5"),
        after("check of three digits", ["2.5"], "val a 0001 00000002 g 5;123\n", "no-check", "2.5"),
        after("check of five digits", ["2.5"], "val a 0001 00000002 g 5;12345\n", "no-check", "2.5"),
        after("check not hex", ["2.5"], "val a 0001 00000002 g 5;12g4\n", "no-check", "2.5"),
        after("a space after the check", ["2.5"], line("echo 01 00000002", " \n"), "no-check", "2.5"),
        after("upper-case check that would fit in lower case", ["2.5"], UPPER_CHECK,
              "upper-hex", "2.5"),
        after("upper-case check that does not fit either", ["2.5"], "note a;ABCD\n",
              "upper-hex", "2.5"),
        after("a separator in the text", ["2.5"], line("note a;b"), "no-check", "2.5"),
        after("two whole lines without an LF between", ["2.5"],
              line("echo 01 00000002", "") + line("echo 01 00000003"), "no-check", "2.5"),
        after("check off by one bit", ["2.6"], spoiled("val a 0001 00000002 g 5"),
              "bad-check", "2.6"),
        after("one digit altered", ["2.6"],
              line("val a 0001 00000002 g 5").replace("g 5", "g 6"), "bad-check", "2.6"),
        after("one byte lost", ["2.6"],
              line("val a 0001 00000002 g 512").replace("512", "52"), "bad-check", "2.6"),
        after("two bytes swapped", ["2.6"],
              line("val a 0001 00000002 g 512").replace("512", "521"), "bad-check", "2.6"),
        after("two lines spliced", ["2.6"],
              "val a 0001 000" + line("val b 0002 00000003 g 77"), "bad-check", "2.6"),
        after("garbage before a line", ["2.6"], "~~" + line("echo 01 00000002"),
              "bad-check", "2.6"),
        stream("check of four zeros", ["2.6"], ZERO_CHECK),
        refused("a leading space", " echo 01 00000002", "bad-word", "2.8"),
        refused("two spaces", "echo  01 00000002", "bad-shape", "2.7"),
        refused("a trailing space", "echo 01 00000002 ", "bad-shape", "2.7"),
        refused("two spaces before a missing count", "val a 0001 00000002 g  5", "bad-shape", "2.7"),
        refused("an empty body", "", "bad-word", "2.8"),
        refused("a word of one letter", "v a", "bad-word", "2.8"),
        refused("a word of nine letters", "abcdefghi 1", "bad-word", "2.8"),
        refused("a word with an upper-case letter", "Val a 0001 00000002 g 5", "bad-word", "2.8"),
        refused("a word with a digit", "val2 a", "bad-word", "2.8"),
        refused("a word with a mark", "val, a", "bad-word", "2.8"),
        stream("empty lines", ["2.9"], ("\n", None), ("\r\n", None), GOOD, ("\n", None), GOOD,
               ("\r\n", None)),
        after("a line of one space", ["2.9", "2.5"], " \n", "no-check", "2.5"),
        stream("a file that ends in CR", ["2.9", "2.2"], GOOD, ("\r", ("unfinished", "2.2"))),
    ]


# A line whose check happens to be 0000, found by search.
ZERO_CHECK = (line("echo 00 00043dc8"), echo(0, 0x43dc8))
assert ZERO_CHECK[0].endswith(";0000\n")

UPPER_CHECK = line("note upper")[:-5] + line("note upper")[-5:].upper()
assert UPPER_CHECK != line("note upper")


def numbers():
    def counted(count):
        return (line("val a 0001 00000002 g %s" % count), val("a", 1, 2, "g", int(count)))

    def bad(name, count):
        return refused(name, "val a 0001 00000002 g " + count, "bad-number", "3.1")

    return [
        stream("decimals at their ends", ["3.1"], counted("0"), counted("9"), counted("-1"),
               counted("9999999"), counted("-9999999"), counted("1000000"), counted("-1000000")),
        bad("decimal with a plus", "+5"),
        bad("decimal with a leading zero", "05"),
        bad("decimal of two zeros", "00"),
        bad("minus zero", "-0"),
        bad("minus with a leading zero", "-05"),
        bad("minus alone", "-"),
        bad("two minus signs", "--5"),
        bad("a point", "5.0"),
        bad("an exponent", "5e3"),
        bad("a hex decimal", "1f"),
        bad("not a number", "nan"),
        bad("eight digits", "10000000"),
        bad("eight digits, negative", "-10000000"),
        bad("eight digits, all zero but one", "00000001"),
        stream("hex at its ends", ["3.2"],
               (line("echo 00 00000000"), echo(0, 0)),
               (line("echo ff ffffffff"), echo(255, 4294967295)),
               (line("echo a9 89abcdef"), echo(169, 2309737967))),
        refused("hex one digit short", "echo 01 0000002", "bad-number", "3.2"),
        refused("hex one digit long", "echo 01 000000002", "bad-number", "3.2"),
        refused("hex with a wrong digit", "echo 01 0000000g", "bad-number", "3.2"),
        refused("hex with a prefix", "echo 01 0x000002", "bad-number", "3.2"),
        refused("upper-case tick", "echo 01 0000000A", "upper-hex", "3.2"),
        refused("upper-case token", "echo 0F 00000002", "upper-hex", "3.2"),
        refused("upper-case and short", "echo 01 000000A", "bad-number", "3.2"),
        refused("upper-case and a wrong digit", "echo 01 000000Ag", "bad-number", "3.2"),
        refused("token of one digit", "echo 1 00000002", "bad-number", "3.2"),
        refused("sequence of three digits", "val a 001 00000002 g 5", "bad-number", "3.2"),
        refused("upper-case sequence", "val a 00FF 00000002 g 5", "upper-hex", "3.2"),
    ]


def here_body(version="1", model="two-port", serial="0007", hz="1000000", ch="2",
              up="0003d090", state="rest", why="asked", tail=""):
    return "here %s %s %s hz=%s ch=%s up=%s state=%s why=%s%s" % (
        version, model, serial, hz, ch, up, state, why, tail)


def heres():
    def good(name, clauses, body, fields):
        return stream(name, clauses, (line(body), fields))

    usual = here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "asked")
    causes = [(line(here_body(why=w)), here("two-port", "0007", 1000000, 2, 0x3d090, "rest", w))
              for w in ("asked", "power", "reset", "brown", "watchdog", "unknown")]
    return [
        good("here without a boot id", ["5.1", "4.8"], here_body(), usual),
        good("here with a boot id", ["5.1", "4.8"], here_body(tail=" boot=0000002a"),
             here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "asked", 42)),
        good("here with boot id zero is not here without", ["5.1", "4.8"],
             here_body(tail=" boot=00000000"),
             here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "asked", 0)),
        good("here of a simulated device", ["5.1"], here_body(tail=" sim=1"),
             here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "asked", sim=True)),
        good("here of a simulated device with a boot id", ["5.1"],
             here_body(tail=" boot=0000002a sim=1"),
             here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "asked", 42, sim=True)),
        refused("here of a half simulated device", here_body(tail=" sim=2"), "bad-word", "5.1"),
        refused("here with sim before boot", here_body(tail=" sim=1 boot=0000002a"),
                "bad-shape", "3.6"),
        stream("every cause", ["5.1"], *causes),
        good("here while running, least numbers", ["5.1", "4.1"],
             "here 1 a b hz=1 ch=0 up=00000000 state=run why=unknown",
             here("a", "b", 1, 0, 0, "run", "unknown")),
        good("here with the longest names and numbers", ["5.1", "3.3"],
             "here 99 ABCDEFGHIJKLMNO. abcdefghijklmn_- hz=1000000 ch=26 up=ffffffff state=rest "
             "why=watchdog boot=ffffffff",
             here("ABCDEFGHIJKLMNO.", "abcdefghijklmn_-", 1000000, 26, 4294967295, "rest",
                  "watchdog", 4294967295, version=99)),
        good("here of a later version", ["11.3"], here_body(version="2", tail=" mood=fine"),
             here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "asked", version=2)),
        good("unknown keys anywhere among the known", ["3.6", "11.1"],
             "here 1 m s aa=1 hz=5 bb=[x]=~ cc=2 ch=1 up=00000001 dd=! state=rest ee=3 why=asked "
             "ff=4 boot=00000007 gg=5",
             here("m", "s", 5, 1, 1, "rest", "asked", 7)),
        good("an unknown key twice", ["3.6"], here_body(tail=" aa=1 aa=2"), usual),
        refused("here with a wrong name", here_body(model="two/port"), "bad-word", "3.3"),
        refused("here with a name of 17", here_body(serial="abcdefghijklmnopq"), "bad-word", "3.3"),
        refused("here with a name that is a key", here_body(serial="a=b"), "bad-word", "3.3"),
        refused("here without a serial number",
                "here 1 m hz=5 ch=1 up=00000001 state=rest why=asked", "bad-shape", "5.1"),
        refused("here without a serial number, with boot",
                "here 1 m hz=5 ch=1 up=00000001 state=rest why=asked boot=00000001",
                "bad-shape", "5.1"),
        refused("here without hz", "here 1 m s xx=5 ch=1 up=00000001 state=rest why=asked",
                "bad-shape", "5.1"),
        refused("here without ch", "here 1 m s hz=5 up=00000001 state=rest why=asked aa=1",
                "bad-shape", "5.1"),
        refused("here without up", "here 1 m s hz=5 ch=1 state=rest why=asked aa=1",
                "bad-shape", "5.1"),
        refused("here without state", "here 1 m s hz=5 ch=1 up=00000001 why=asked aa=1",
                "bad-shape", "5.1"),
        refused("here without why", "here 1 m s hz=5 ch=1 up=00000001 state=rest aa=1",
                "bad-shape", "5.1"),
        refused("here and nothing else", "here", "bad-shape", "5.1"),
        refused("here with two keys swapped",
                "here 1 m s ch=1 hz=5 up=00000001 state=rest why=asked", "bad-shape", "3.6"),
        refused("here with a key twice",
                "here 1 m s hz=5 hz=5 ch=1 up=00000001 state=rest why=asked", "bad-shape", "3.6"),
        refused("here with boot first", "here 1 m s boot=00000001 hz=5 ch=1 up=00000001 state=rest "
                "why=asked", "bad-shape", "3.6"),
        refused("here with an empty value", here_body(hz=""), "bad-shape", "3.6"),
        refused("here with a field that has no key", here_body(tail=" hello"), "bad-shape", "3.6"),
        refused("here with a key of one letter", here_body(tail=" a=1"), "bad-shape", "3.6"),
        refused("here with a key of nine letters", here_body(tail=" abcdefghi=1"),
                "bad-shape", "3.6"),
        refused("here with an upper-case key", here_body(tail=" Aa=1"), "bad-shape", "3.6"),
        refused("here of version 0", here_body(version="0"), "out-of-bounds", "5.1"),
        refused("here of version 100", here_body(version="100"), "out-of-bounds", "5.1"),
        refused("here of version one", here_body(version="one"), "bad-number", "3.1"),
        refused("no ticks", here_body(hz="0"), "out-of-bounds", "5.1"),
        refused("ticks backwards", here_body(hz="-1"), "out-of-bounds", "5.1"),
        refused("ticks too fast", here_body(hz="1000001"), "out-of-bounds", "5.1"),
        refused("ticks in eight digits", here_body(hz="16000000"), "bad-number", "3.1"),
        refused("27 channels", here_body(ch="27"), "out-of-bounds", "5.1"),
        refused("minus one channel", here_body(ch="-1"), "out-of-bounds", "5.1"),
        refused("up of seven digits", here_body(up="003d090"), "bad-number", "3.2"),
        refused("up in upper case", here_body(up="0003D090"), "upper-hex", "3.2"),
        refused("a state that is none", here_body(state="busy"), "bad-word", "5.1"),
        refused("a cause that is none", here_body(why="magic"), "bad-word", "5.1"),
        refused("a boot id in decimal", here_body(tail=" boot=42"), "bad-number", "3.2"),
        refused("a boot id in upper case", here_body(tail=" boot=0000002A"), "upper-hex", "3.2"),
    ]


UNITS = {
    "pressure": ["[psi]", "Pa", "kPa", "MPa", "bar", "mbar"],
    "extension": ["[in_i]", "mm", "um", "m"],
    "force": ["N", "kN", "[lbf_av]", "kgf"],
    "torque": ["N.m", "[ft_i].[lbf_av]", "[in_i].[lbf_av]"],
    "angle": ["circ", "deg", "rad"],
    "spring": ["[in_i]", "mm", "m"],
    "temperature": ["Cel", "[degF]", "K"],
    "voltage": ["V", "mV"],
}


def chan_body(channel="a", quantity="pressure", unit="[psi]", scale="1e-1", lo="-200",
              hi="15200", per="10000", tail=""):
    return "chan %s %s %s %s lo=%s hi=%s per=%s%s" % (
        channel, quantity, unit, scale, lo, hi, per, tail)


def chans():
    def usual(**more):
        return chan("a", "pressure", "[psi]", 1, -1, -200, 15200, 10000, **more)

    def good(name, clauses, body, fields):
        return stream(name, clauses, (line(body), fields))

    def scaled(scale, mantissa, exponent):
        return (line(chan_body(scale=scale)),
                chan("a", "pressure", "[psi]", mantissa, exponent, -200, 15200, 10000))

    def tails(*pairs):
        return [(line(chan_body(tail=" " + tail)), usual(**more)) for tail, more in pairs]

    out = [stream("every unit of " + q, ["6.1", "6.2"],
                  *[(line(chan_body(quantity=q, unit=u)),
                     chan("a", q, u, 1, -1, -200, 15200, 10000)) for u in us])
           for q, us in UNITS.items()]
    out += [
        good("chan with nothing left out", ["5.2", "6.4", "6.6"],
             "chan b extension [in_i] 5e-5 lo=-1000 hi=19000 per=100000 res=2 zero=-7 "
             "shows=rounded face=A span=1 sn=E-77",
             chan("b", "extension", "[in_i]", 5, -5, -1000, 19000, 100000, res=2, zero=-7,
                  shows="rounded", face="A", span=1, sn="E-77")),
        good("chan with everything left out", ["5.2"], chan_body(), usual()),
        good("chan with the defaults written", ["5.2"],
             chan_body(tail=" res=1 zero=0 shows=unknown"), usual()),
        good("chan z, least numbers", ["3.5", "5.2"],
             "chan z force N 1e0 lo=-9999999 hi=-9999998 per=1",
             chan("z", "force", "N", 1, 0, -9999999, -9999998, 1)),
        stream("scales at their ends", ["3.4", "6.3"], scaled("1e0", 1, 0),
               scaled("9999999e12", 9999999, 12), scaled("-9999999e-12", -9999999, -12),
               scaled("-1e-1", -1, -1)),
        stream("ways of showing", ["6.4"], *tails(
            ("shows=rounded", {"shows": "rounded"}), ("shows=truncated", {"shows": "truncated"}),
            ("shows=unknown", {"shows": "unknown"}))),
        stream("positions", ["6.6", "3.5"], *tails(
            ("face=A", {"face": "A"}), ("face=B", {"face": "B"}), ("span=1", {"span": 1}),
            ("span=2", {"span": 2}), ("face=B span=2", {"face": "B", "span": 2}))),
        stream("numbers at their ends", ["5.2"], *tails(
            ("res=9999999", {"res": 9999999}), ("zero=9999999", {"zero": 9999999}),
            ("zero=-9999999", {"zero": -9999999}))),
        good("chan with unknown keys", ["3.6", "11.1"],
             "chan a force N 1e0 xx=1 lo=0 yy=2 hi=1 per=1 zz=3 res=2 ww=4 sn=q vv=5",
             chan("a", "force", "N", 1, 0, 0, 1, 1, res=2, sn="q")),
        good("chan with as many unknown keys as a line can hold", ["3.6", "2.3"],
             "chan a force N 1e0 lo=0 hi=1 per=1" + " ab=c" * 16,
             chan("a", "force", "N", 1, 0, 0, 1, 1)),
        refused("channel in upper case", chan_body(channel="A"), "bad-word", "3.5"),
        refused("channel of two letters", chan_body(channel="ab"), "bad-word", "3.5"),
        refused("channel 1", chan_body(channel="1"), "bad-word", "3.5"),
        refused("a quantity that is none", chan_body(quantity="weight"), "bad-word", "6.1"),
        refused("a quantity of a later version", chan_body(quantity="speed", unit="m"),
                "bad-word", "6.1"),
        refused("a unit of another quantity", chan_body(unit="mm"), "bad-word", "6.2"),
        refused("a unit in other letters", chan_body(unit="psi"), "bad-word", "6.2"),
        refused("a unit in other case", chan_body(unit="mpa"), "bad-word", "6.2"),
        refused("scale without e", chan_body(scale="0.1"), "bad-number", "3.4"),
        refused("scale with a plus", chan_body(scale="1e+1"), "bad-number", "3.4"),
        refused("scale with an upper-case E", chan_body(scale="1E-1"), "bad-number", "3.4"),
        refused("scale with a leading zero", chan_body(scale="1e-01"), "bad-number", "3.4"),
        refused("scale without a mantissa", chan_body(scale="e-1"), "bad-number", "3.4"),
        refused("scale without an exponent", chan_body(scale="1e"), "bad-number", "3.4"),
        refused("scale of eight digits", chan_body(scale="10000000e0"), "bad-number", "3.4"),
        refused("scale with two e", chan_body(scale="1e1e1"), "bad-number", "3.4"),
        refused("scale zero", chan_body(scale="0e0"), "out-of-bounds", "3.4"),
        refused("exponent 13", chan_body(scale="1e13"), "out-of-bounds", "3.4"),
        refused("exponent -13", chan_body(scale="1e-13"), "out-of-bounds", "3.4"),
        refused("exponent 256", chan_body(scale="1e256"), "out-of-bounds", "3.4"),
        refused("lo equals hi", chan_body(lo="5", hi="5"), "out-of-bounds", "5.2"),
        refused("lo above hi", chan_body(lo="6", hi="5"), "out-of-bounds", "5.2"),
        refused("lo of eight digits", chan_body(lo="-10000000"), "bad-number", "3.1"),
        refused("hi with a point", chan_body(hi="1520.0"), "bad-number", "3.1"),
        refused("period 0", chan_body(per="0"), "out-of-bounds", "5.2"),
        refused("period negative", chan_body(per="-1"), "out-of-bounds", "5.2"),
        refused("res 0", chan_body(tail=" res=0"), "out-of-bounds", "5.2"),
        refused("res with a leading zero", chan_body(tail=" res=01"), "bad-number", "3.1"),
        refused("zero of eight digits", chan_body(tail=" zero=10000000"), "bad-number", "3.1"),
        refused("a way of showing that is none", chan_body(tail=" shows=floor"), "bad-word", "6.4"),
        refused("face C", chan_body(tail=" face=C"), "bad-word", "3.5"),
        refused("face in lower case", chan_body(tail=" face=a"), "bad-word", "3.5"),
        refused("span 3", chan_body(tail=" span=3"), "bad-word", "3.5"),
        refused("span 0", chan_body(tail=" span=0"), "bad-word", "3.5"),
        refused("span 01", chan_body(tail=" span=01"), "bad-word", "3.5"),
        refused("a sensor name with a mark", chan_body(tail=" sn=a/b"), "bad-word", "3.3"),
        refused("a sensor name of 17", chan_body(tail=" sn=abcdefghijklmnopq"), "bad-word", "3.3"),
        refused("chan without per", "chan a pressure [psi] 1e-1 lo=-200 hi=15200 aa=1",
                "bad-shape", "5.2"),
        refused("chan without lo", "chan a pressure [psi] 1e-1 hi=15200 per=1 aa=1",
                "bad-shape", "5.2"),
        refused("chan of seven fields", "chan a pressure [psi] 1e-1 lo=-200 hi=15200",
                "bad-shape", "5.2"),
        refused("chan with options out of order", chan_body(tail=" sn=q face=A"),
                "bad-shape", "3.6"),
        refused("chan with an option before the range",
                "chan a pressure [psi] 1e-1 res=2 lo=-200 hi=15200 per=1", "bad-shape", "3.6"),
        refused("chan with an option twice", chan_body(tail=" res=2 res=2"), "bad-shape", "3.6"),
        refused("chan with an extra field", chan_body(tail=" extra"), "bad-shape", "3.6"),
    ]
    return out


def vals():
    return [
        stream("every status", ["5.3", "6.5"],
               (line("val a 0010 00000100 g 7240"), val("a", 16, 256, "g", 7240)),
               (line("val b 0011 00000101 l -200"), val("b", 17, 257, "l", -200)),
               (line("val c 0012 00000102 h 15200"), val("c", 18, 258, "h", 15200)),
               (line("val y 0013 00000103 x"), val("y", 19, 259, "x")),
               (line("val z 0014 00000104 f"), val("z", 20, 260, "f"))),
        stream("count zero is a reading, no count is none", ["5.3", "1.4", "6.5"],
               (line("val a 0000 00000000 g 0"), val("a", 0, 0, "g", 0)),
               (line("val a 0001 00000001 x"), val("a", 1, 1, "x"))),
        stream("the longest val", ["5.3"],
               (line("val z ffff ffffffff h -9999999"), val("z", 65535, 4294967295, "h", -9999999))),
        refused("good without a count", "val a 0001 00000002 g", "bad-shape", "5.3"),
        refused("low without a count", "val a 0001 00000002 l", "bad-shape", "5.3"),
        refused("high without a count", "val a 0001 00000002 h", "bad-shape", "5.3"),
        refused("absent with a count", "val a 0001 00000002 x 0", "bad-shape", "5.3"),
        refused("fault with a count", "val a 0001 00000002 f 5", "bad-shape", "5.3"),
        refused("a status that is none", "val a 0001 00000002 q 5", "bad-word", "5.3"),
        refused("a status that is none, no count", "val a 0001 00000002 q", "bad-word", "5.3"),
        refused("an upper-case status", "val a 0001 00000002 G 5", "bad-word", "5.3"),
        refused("a status of two letters", "val a 0001 00000002 gg 5", "bad-word", "5.3"),
        refused("val without a status", "val a 0001 00000002", "bad-shape", "5.3"),
        refused("val with two counts", "val a 0001 00000002 g 5 6", "bad-shape", "5.3"),
        refused("val and nothing else", "val", "bad-shape", "5.3"),
        refused("val of forty fields", "val" + " a" * 39, "bad-shape", "5.3"),
        refused("val of forty fields and a trailing space", "val" + " a" * 39 + " ", "bad-shape", "2.7"),
        refused("val without a channel", "val 0001 00000002 g 5", "bad-word", "3.5"),
        refused("val without a channel and a count", "val 0001 00000002 x", "bad-shape", "5.3"),
        refused("val of channel A", "val A 0001 00000002 g 5", "bad-word", "3.5"),
        refused("val of channel {", "val { 0001 00000002 g 5", "bad-word", "3.5"),
        refused("val of channel `", "val ` 0001 00000002 g 5", "bad-word", "3.5"),
    ]


def others():
    return [
        stream("buttons", ["5.4", "3.5"],
               (line("btn 1 0003 00082a00 down"), btn(1, 3, 0x82a00, "down")),
               (line("btn 9 0004 00083a00 up"), btn(9, 4, 0x83a00, "up"))),
        refused("button 0", "btn 0 0003 00082a00 down", "bad-word", "3.5"),
        refused("button 10", "btn 10 0003 00082a00 down", "bad-word", "3.5"),
        refused("button a", "btn a 0003 00082a00 down", "bad-word", "3.5"),
        refused("button pressed", "btn 1 0003 00082a00 pressed", "bad-word", "5.4"),
        refused("button without an edge", "btn 1 0003 00082a00", "bad-shape", "5.4"),
        refused("button with more", "btn 1 0003 00082a00 down 5", "bad-shape", "5.4"),
        stream("beats", ["5.5"],
               (line("beat 0005 000f4240 00000000 00000000"), beat(5, 1000000, 0, 0)),
               (line("beat ffff ffffffff ffffffff ffffffff"),
                beat(65535, 4294967295, 4294967295, 4294967295))),
        refused("beat without refused", "beat 0005 000f4240 00000000", "bad-shape", "5.5"),
        refused("beat with more", "beat 0005 000f4240 00000000 00000000 0", "bad-shape", "5.5"),
        refused("beat with a decimal", "beat 0005 000f4240 0 00000000", "bad-number", "3.2"),
        refused("beat in upper case", "beat 0005 000f4240 00000000 0000000F", "upper-hex", "3.2"),
        stream("every verb done", ["5.6"], *[
            (line("did %02x %s" % (t, v)), did(t, v))
            for t, v in enumerate(("who", "run", "rest", "pace"), 0xfc)]),
        refused("did echo", "did 01 echo", "bad-word", "5.6"),
        refused("did nothing", "did 01", "bad-shape", "5.6"),
        refused("did a verb that is none", "did 01 jump", "bad-word", "5.6"),
        refused("did with more", "did 01 run 5", "bad-shape", "5.6"),
        stream("refusals", ["5.7"],
               (line("wont 0a jump unknown"), wont(10, "jump", "unknown")),
               (line("wont 0b pace period"), wont(11, "pace", "period")),
               (line("wont 0c run busy"), wont(12, "run", "busy")),
               (line("wont 0d abcdefgh tired"), wont(13, "abcdefgh", "tired"))),
        refused("wont without why", "wont 0a jump", "bad-shape", "5.7"),
        refused("wont with two whys", "wont 0a jump too busy", "bad-shape", "5.7"),
        refused("wont with a verb that is no word", "wont 0a Jump busy", "bad-word", "2.8"),
        refused("wont with a why that is no word", "wont 0a jump b", "bad-word", "2.8"),
        stream("echo", ["5.8"], (line("echo 03 0007a120"), echo(3, 500000))),
        refused("echo without a tick", "echo 03", "bad-shape", "5.8"),
        refused("echo with more", "echo 03 0007a120 0", "bad-shape", "5.8"),
        stream("notes", ["5.9"],
               (line("note x"), note("x")),
               (line("note   two  spaces "), note("  two  spaces ")),
               (line("note val a 0001 00000002 g 5"), note("val a 0001 00000002 g 5"))),
        refused("note without a text", "note", "bad-shape", "5.9"),
        refused("note of no text", "note ", "bad-shape", "5.9"),
        stream("unknown records", ["5.10", "11.1"],
               (line("ab"), unknown("ab", "ab")),
               (line("abcdefgh "), unknown("abcdefgh", "abcdefgh ")),
               (line("moon  FULL =: "), unknown("moon", "moon  FULL =: ")),
               (line("vals a 0001 00000002 g 5"), unknown("vals", "vals a 0001 00000002 g 5")),
               (line("va a"), unknown("va", "va a")),
               (line("run 04"), unknown("run", "run 04"))),
        after("an unknown record with a bad check", ["5.10", "2.6"], spoiled("moon full"),
              "bad-check", "2.6"),
        after("a bare who among records", ["2.5"], "who\n", "no-check", "2.5"),
    ]


def orders():
    """Lines with two faults: the first in the order of 8.1 decides."""
    def first(name, text, cls, clause):
        return after("first fault: " + name, ["8.1", "8.2", "8.3"], text, cls, clause)

    return [
        first("too long before bad byte", "\x00" * 200 + "\n", "too-long", "2.3"),
        stream("first fault: too long before unfinished", ["8.1"],
               ("x" * 300, ("too-long", "2.3"))),
        first("bad byte before no check", "val \x01\n", "bad-byte", "2.1"),
        first("no check before word", "VAL a\n", "no-check", "2.5"),
        first("upper-case check before its value", "VAL a;00FF\n", "upper-hex", "2.5"),
        first("check before word", spoiled("VAL a"), "bad-check", "2.6"),
        first("word before shape", line("VAL  a"), "bad-word", "2.8"),
        first("spaces before number of fields", line("val a  b c d e f g"), "bad-shape", "2.7"),
        first("number of fields before fields", line("val A 00G1 5"), "bad-shape", "5.3"),
        first("count of a val before its channel", line("val A 0001 00000002 x 5"),
              "bad-shape", "5.3"),
        first("keys before fields", line("here 0 m/ s hz=5 ch=1 up=1 state=no why=no Z"),
              "bad-shape", "3.6"),
        first("a key out of order before a missing key",
              line("here 1 m s ch=1 hz=5 up=00000001 state=rest aa=1"), "bad-shape", "3.6"),
        first("left field before right: word, number", line("val A 1 00000002 g 5"),
              "bad-word", "3.5"),
        first("left field before right: number, word", line("val a 1 00000002 q 5"),
              "bad-number", "3.2"),
        first("left field before right: upper case, number", line("val a 00FF 00000002 g 05"),
              "upper-hex", "3.2"),
        first("left field before right: bounds, number", line(here_body(hz="0", ch="02")),
              "out-of-bounds", "5.1"),
        first("form before bounds of one field", line(here_body(hz="00")), "bad-number", "3.1"),
        first("a field's fault before lo above hi", line(chan_body(lo="6", hi="5", tail=" face=C")),
              "bad-word", "3.5"),
        first("quantity before unit", line(chan_body(quantity="weight", unit="stone")),
              "bad-word", "6.1"),
    ]


def streams():
    """What well-behaved devices send, as one reader sees it."""
    hello = here("two-port", "0007", 1000000, 2, 0x1e240, "rest", "power", 42)
    again = here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "asked", 42)
    hello_line = line(here_body(up="0001e240", why="power", tail=" boot=0000002a"))
    again_line = line(here_body(up="0003d090", tail=" boot=0000002a"))
    a = (line(chan_body(tail=" sn=P-118")),
         chan("a", "pressure", "[psi]", 1, -1, -200, 15200, 10000, sn="P-118"))
    b = (line("chan b extension [in_i] 5e-5 lo=-1000 hi=19000 per=100000 shows=rounded"),
         chan("b", "extension", "[in_i]", 5, -5, -1000, 19000, 100000, shows="rounded"))
    log = here("card", "3", 1000, 1, 0, "run", "power", 7)
    log_line = line("here 1 card 3 hz=1000 ch=1 up=00000000 state=run why=power boot=00000007")
    log_next = here("card", "3", 1000, 1, 0, "run", "brown", 8)
    log_next_line = line("here 1 card 3 hz=1000 ch=1 up=00000000 state=run why=brown boot=00000008")
    c = (line("chan c force kN 1e-3 lo=-100 hi=50000 per=100"),
         chan("c", "force", "kN", 1, -3, -100, 50000, 100))
    return [
        stream("a boot after a bootloader's bytes", ["4.7", "9.2", "2.9"],
               ("\xf0\x00\x80?\n", ("bad-byte", "2.1")), (hello_line, hello), a, b),
        stream("answers to who, pace, run, rest", ["7.4", "7.5", "7.6", "7.7", "9.4", "7.2"],
               (again_line, again), a, b, (line("did 01 who"), did(1, "who")),
               (line("did 02 pace"), did(2, "pace")), (line("did 03 run"), did(3, "run")),
               (line("val a 0000 0007d000 g 7240"), val("a", 0, 0x7d000, "g", 7240)),
               (line("did 04 rest"), did(4, "rest"))),
        stream("answers to a bare who", ["7.9"], (again_line, again), a, b),
        stream("answers of a device whose period is fixed", ["9.4", "7.3"],
               (line("wont 05 pace unknown"), wont(5, "pace", "unknown")),
               (line("wont 06 jump unknown"), wont(6, "jump", "unknown"))),
        stream("one answer for each token", ["7.1", "7.8"],
               (line("echo 07 00000010"), echo(7, 16)), (line("echo 08 00000020"), echo(8, 32))),
        stream("numbered lines of three kinds share the sequence", ["1.3", "4.4", "9.1", "9.5"],
               (line("val a 0000 00000064 g 1"), val("a", 0, 100, "g", 1)),
               (line("btn 1 0001 00000065 down"), btn(1, 1, 101, "down")),
               (line("beat 0002 00000066 00000000 00000000"), beat(2, 102, 0, 0)),
               (line("note not numbered"), note("not numbered")),
               (line("val a 0003 00000067 g 1"), val("a", 3, 103, "g", 1))),
        stream("tick and sequence wrap", ["4.1", "4.2", "4.4"],
               (line("val a fffe fffffff0 g 1"), val("a", 65534, 4294967280, "g", 1)),
               (line("val a ffff ffffffff g 2"), val("a", 65535, 4294967295, "g", 2)),
               (line("val a 0000 0000000e g 3"), val("a", 0, 14, "g", 3))),
        stream("channels a little out of order", ["4.3"],
               (line("val a 0000 00000100 g 1"), val("a", 0, 256, "g", 1)),
               (line("val b 0001 000000f0 g 2"), val("b", 1, 240, "g", 2)),
               (line("val a 0002 00000110 g 3"), val("a", 2, 272, "g", 3))),
        stream("two lines dropped by the device", ["4.5", "4.6"],
               (line("val a 0007 00000700 g 1"), val("a", 7, 1792, "g", 1)),
               (line("beat 000a 00000a00 00000002 00000000"), beat(10, 2560, 2, 0))),
        stream("a device without memory for a boot id", ["4.8"],
               (line(here_body(why="reset")),
                here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "reset"))),
        stream("a card log with two boots and a torn end", ["10.1", "10.2", "10.3"],
               ("\n", None), (log_line, log), c,
               (line("val c 0000 00000064 g 12"), val("c", 0, 100, "g", 12)),
               ("val c 0001 000000c8 g\n", ("no-check", "2.5")),
               (log_next_line, log_next), c,
               (line("val c 0000 00000064 g 13"), val("c", 0, 100, "g", 13)),
               ("val c 0001 00000", ("unfinished", "2.2"))),
        stream("words that a later version may add are refused or ignored", ["11.2", "11.1"],
               (line("chan d humidity % 1e0 lo=0 hi=100 per=100"), ("bad-word", "6.1")),
               (line("val d 0001 00000002 g 55"), val("d", 1, 2, "g", 55)),
               (line("val a 0002 00000003 s 55"), ("bad-word", "5.3")),
               (line("hum d 0003"), unknown("hum", "hum d 0003"))),
        stream("a later version answers who", ["11.3", "11.4"],
               (line(here_body(version="3", tail=" mood=fine")),
                here("two-port", "0007", 1000000, 2, 0x3d090, "rest", "asked", version=3)),
               (line("did 01 who"), did(1, "who"))),
    ]
