"""Bytes by hand: the check sum and the frame of SPEC 2, nothing more."""

POLY = 0x11021  # x^16 + x^12 + x^5 + 1


def crc(body):
    """CRC-16/CCITT-FALSE as the remainder of one long division (SPEC 2.6).

    An initial value of ffff is the same as inverting the first 16 bits of the
    message followed by 16 zero bits.
    """
    bits = 8 * len(body) + 16
    value = (int.from_bytes(body, "big") << 16) ^ (0xFFFF << (bits - 16))
    for shift in range(bits - 17, -1, -1):
        if value >> (shift + 16) & 1:
            value ^= POLY << shift
    return value & 0xFFFF


# Published check value, catalogue of parametrised CRC algorithms,
# CRC-16/IBM-3740 (alias CRC-16/CCITT-FALSE).
assert crc(b"123456789") == 0x29B1


def line(body, end="\n"):
    """A whole line: body, separator, check, line end."""
    return "%s;%04x%s" % (body, crc(body.encode("latin-1")), end)


def spoiled(body, end="\n"):
    """A line whose check has its lowest bit wrong."""
    return "%s;%04x%s" % (body, crc(body.encode("latin-1")) ^ 1, end)


def note_of(total, end="\n"):
    """A note line of exactly so many bytes, line end included."""
    made = line("note " + "n" * (total - len("note ") - 5 - len(end)), end)
    assert len(made) == total
    return made


def stream(name, clauses, *parts):
    """A decode vector. A part is (text of one line, what must come of it).

    What must come of it is the fields of a record, a pair (class, clause), or
    None for an empty line. Line number and byte offset are counted here.
    """
    lines, offset = [], 0
    for number, (text, outcome) in enumerate(parts, 1):
        if outcome is not None:
            at = {"number": number, "offset": offset}
            if isinstance(outcome, dict):
                at["record"] = outcome
            else:
                at["class"], at["clause"] = outcome
            lines.append(at)
        offset += len(text)
    return {"name": name, "clauses": clauses,
            "stream": "".join(text for text, _ in parts), "lines": lines}


def val(channel, seq, tick, status, count=None):
    fields = {"word": "val", "channel": channel, "seq": seq, "tick": tick, "status": status}
    if count is not None:
        fields["count"] = count
    return fields


def btn(button, seq, tick, edge):
    return {"word": "btn", "button": button, "seq": seq, "tick": tick, "edge": edge}


def beat(seq, tick, dropped, refused):
    return {"word": "beat", "seq": seq, "tick": tick, "dropped": dropped, "refused": refused}


def did(token, verb):
    return {"word": "did", "token": token, "verb": verb}


def wont(token, verb, why):
    return {"word": "wont", "token": token, "verb": verb, "why": why}


def echo(token, tick):
    return {"word": "echo", "token": token, "tick": tick}


def note(text):
    return {"word": "note", "text": text}


def unknown(word, body):
    return {"word": "unknown", "is": word, "body": body}


def here(model, serial, hz, ch, up, state, why, boot=None, version=1, sim=False):
    fields = {"word": "here", "version": version, "model": model, "serial": serial,
              "hz": hz, "ch": ch, "up": up, "state": state, "why": why}
    if boot is not None:
        fields["boot"] = boot
    if sim:
        fields["sim"] = True
    return fields


def chan(channel, quantity, unit, mantissa, exponent, lo, hi, per, res=1, zero=0,
         shows="unknown", face="", span=0, sn=""):
    return {"word": "chan", "channel": channel, "quantity": quantity, "unit": unit,
            "mantissa": mantissa, "exponent": exponent, "lo": lo, "hi": hi, "per": per,
            "res": res, "zero": zero, "shows": shows, "face": face, "span": span, "sn": sn}
