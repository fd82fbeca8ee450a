"""Command vectors: fields of a command and its bytes, both ways."""

from wire import line, spoiled


def command(verb, token=None, channel="", period=0):
    """The fields of a command. A bare who has no token."""
    fields = {"verb": verb}
    if token is not None:
        fields["token"] = token
    if channel:
        fields["channel"], fields["period"] = channel, period
    return fields


def both(name, clauses, fields, text):
    """Reads as these fields, and is written so."""
    return {"name": name, "clauses": clauses, "command": fields, "line": text, "way": "both"}


def reads(name, clauses, fields, text):
    """Reads as these fields; a writer writes it otherwise."""
    return {"name": name, "clauses": clauses, "command": fields, "line": text, "way": "read"}


def refused(name, text, cls, clause, answer=None, also=()):
    """Is refused; answer is the word and token that a wont repeats (7.3)."""
    out = {"name": name, "clauses": [clause, "7.3", *also], "line": text, "class": cls,
           "clause": clause, "way": "read"}
    if answer:
        out["answer"] = {"verb": answer[0], "token": answer[1]}
    return out


def cannot(name, clauses, fields, cls):
    return {"name": name, "clauses": clauses, "command": fields, "class": cls, "way": "write"}


def vectors():
    return good() + frames() + answered() + unwritable()


def good():
    return [
        both("who", ["7.4", "7.1"], command("who", 1), line("who 01")),
        both("run", ["7.5"], command("run", 4), line("run 04")),
        both("rest", ["7.6"], command("rest", 5), line("rest 05")),
        both("pace", ["7.7"], command("pace", 2, "a", 20000), line("pace 02 a 20000")),
        both("echo", ["7.8"], command("echo", 3), line("echo 03")),
        both("a bare who", ["7.9"], command("who"), "who\n"),
        both("token 00", ["3.2"], command("run", 0), line("run 00")),
        both("token ff", ["3.2"], command("run", 255), line("run ff")),
        both("token a9", ["3.2"], command("who", 169), line("who a9")),
        both("the shortest period", ["7.7"], command("pace", 0, "a", 1), line("pace 00 a 1")),
        both("the longest period", ["7.7"], command("pace", 255, "z", 9999999),
             line("pace ff z 9999999")),
        reads("who with CR", ["2.2"], command("who", 1), line("who 01", "\r\n")),
        reads("a bare who with CR", ["7.9", "2.2"], command("who"), "who\r\n"),
    ]


def long_command(total):
    text = line("jump 01 " + "x" * (total - 14))
    assert len(text) == total
    return text


def frames():
    """Faults of the frame: no answer."""
    return [
        refused("command of exactly 32 bytes", long_command(32), "bad-word", "2.8", ("jump", 1)),
        refused("command of 33 bytes", long_command(33), "too-long", "2.4", also=["9.3"]),
        refused("command of 33 bytes with CR", long_command(32)[:-1] + "\r\n", "too-long", "2.4"),
        refused("command of NUL bytes", "\x00" * 8 + "\n", "bad-byte", "2.1"),
        refused("command with a byte of 0xff", line("run 0\xff"), "bad-byte", "2.1"),
        refused("command with two CR", line("run 01", "\r\r\n"), "bad-byte", "2.1"),
        refused("command without a check", "run 01\n", "no-check", "2.5"),
        refused("bare run", "run\n", "no-check", "2.5"),
        refused("bare who in upper case", "WHO\n", "no-check", "2.5"),
        refused("bare who with a space", "who \n", "no-check", "2.5"),
        refused("bare who with a token", "who 01\n", "no-check", "2.5"),
        refused("empty command", "\n", "no-check", "2.5"),
        refused("command with a short check", "run 01;123\n", "no-check", "2.5"),
        refused("command with an upper-case check", "run 01;12AB\n", "upper-hex", "2.5"),
        refused("command with a wrong check", spoiled("run 01"), "bad-check", "2.6"),
        refused("two commands spliced", "run 0" + line("rest 05"), "bad-check", "2.6"),
        refused("two commands without LF", line("run 04", "") + line("rest 05"),
                "no-check", "2.5"),
    ]


def answered():
    """Good checks: answered with wont where word and token can be read."""
    return [
        refused("an unknown verb", line("jump 0a"), "bad-word", "2.8", ("jump", 10)),
        refused("an unknown verb with more", line("jump 0a b 5"), "bad-word", "2.8", ("jump", 10)),
        refused("an unknown verb without a token", line("jump"), "bad-word", "2.8"),
        refused("a verb in upper case", line("RUN 01"), "bad-word", "2.8"),
        refused("a record's word", line("val 0a"), "bad-word", "2.8", ("val", 10)),
        refused("who without a token, with a check", line("who"), "bad-shape", "7.4"),
        refused("who with more", line("who 01 5"), "bad-shape", "7.4", ("who", 1)),
        refused("run with more", line("run 01 5"), "bad-shape", "7.5", ("run", 1)),
        refused("rest with more", line("rest 01 5"), "bad-shape", "7.6", ("rest", 1)),
        refused("echo with more", line("echo 01 5"), "bad-shape", "7.8", ("echo", 1)),
        refused("pace without a period", line("pace 01 a"), "bad-shape", "7.7", ("pace", 1)),
        refused("pace with more", line("pace 01 a 5 5"), "bad-shape", "7.7", ("pace", 1)),
        refused("two spaces in a command", line("run  01"), "bad-shape", "2.7"),
        refused("two spaces behind the token", line("pace 01  5"), "bad-shape", "2.7", ("pace", 1)),
        refused("a trailing space in a command", line("run 01 "), "bad-shape", "2.7", ("run", 1)),
        refused("token of one digit", line("run 1"), "bad-number", "3.2"),
        refused("token of three digits", line("run 001"), "bad-number", "3.2"),
        refused("token not hex", line("run 0g"), "bad-number", "3.2"),
        refused("token in upper case", line("run 0A"), "upper-hex", "3.2"),
        refused("pace of channel A", line("pace 01 A 5"), "bad-word", "3.5", ("pace", 1)),
        refused("pace of period 0", line("pace 01 a 0"), "out-of-bounds", "7.7", ("pace", 1)),
        refused("pace of a negative period", line("pace 01 a -5"), "out-of-bounds", "7.7",
                ("pace", 1)),
        refused("pace of eight digits", line("pace 01 a 10000000"), "bad-number", "3.1",
                ("pace", 1)),
        refused("pace with a leading zero", line("pace 01 a 05"), "bad-number", "3.1", ("pace", 1)),
        refused("first fault: token before channel", line("pace 1 A 05"), "bad-number", "3.2"),
        refused("first fault: number of fields before token", line("run 0A 5"), "bad-shape", "7.5"),
    ]


def unwritable():
    return [
        cannot("a verb that is none", ["7.3"], command("jump", 1), "bad-word"),
        cannot("no verb", ["7.3"], command("", 1), "bad-word"),
        cannot("a bare run", ["7.9"], command("run"), "no-check"),
        cannot("writing pace of channel A", ["7.7"], command("pace", 1, "A", 5), "bad-word"),
        cannot("writing pace of period 0", ["7.7"], command("pace", 1, "a", 0), "out-of-bounds"),
        cannot("writing pace of period 10000000", ["7.7"], command("pace", 1, "a", 10000000), "bad-number"),
    ]
