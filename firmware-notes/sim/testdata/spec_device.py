#!/usr/bin/env python3
"""A measuring board in Python, standard library only, made from protocol/SPEC.md
and from nothing else: the comments name its clauses. It opens a pseudo-terminal,
prints its path, and pretends to sit on tensioner T-1 of the invented mill.

usage: spec_device.py SPEED
"""

import os
import re
import select
import sys
import termios
import time
import tty

HZ = 32768  # 4.1
LO_HI = {"p": (-300, 21000), "x": (-9000, 9000)}

# The pretended tensioner, in inches, pounds and psi.
AREA, WEIGHT, FRICTION, PART = 9.817477, 820.0, 210.0, 0.045
NET, LENGTH, MODULUS = 0.3045, 20.0, 29.0e6
ZERO_IN = 0.0123


def crc(data):
    """2.6, bit by bit."""
    value = 0xFFFF
    for byte in data:
        value ^= byte << 8
        for _ in range(8):
            value = (value << 1) ^ 0x1021 if value & 0x8000 else value << 1
            value &= 0xFFFF
    return value


assert crc(b"123456789") == 0x29B1  # 2.6


class Tensioner:
    """Oil pressure by the clock; a wheel that friction holds back both ways."""

    def __init__(self):
        self.pull = 0.0
        self.corners = [(0.0, 5.0), (6.0, 5.0)]
        for top in (420.0, 860.0, 860.0):
            self.leg(top, 15.0)
            self.leg(top, None, 4.0)
            self.leg(5.0, 15.0)
            self.leg(5.0, None, 8.0)

    def leg(self, psi, rate, seconds=0.0):
        at, now = self.corners[-1]
        self.corners.append((at + (abs(psi - now) / rate if rate else seconds), psi))

    def at(self, seconds):
        psi = self.corners[-1][1]
        for (t0, p0), (t1, p1) in zip(self.corners, self.corners[1:]):
            if seconds < t1:
                psi = p0 + (p1 - p0) * max(0.0, seconds - t0) / (t1 - t0)
                break
        lift = psi * AREA
        held = self.pull + WEIGHT
        held = min(max(held, (lift - FRICTION) / (1 + PART)), (lift + FRICTION) / (1 - PART))
        self.pull = max(0.0, held - WEIGHT)
        return psi, ZERO_IN + LENGTH * self.pull / (2 * NET) / MODULUS


class Device:
    def __init__(self, fd, speed):
        self.fd, self.speed, self.began = fd, speed, time.monotonic()
        self.out, self.line, self.long = bytearray(), bytearray(), 0
        self.running, self.seq, self.dropped, self.refused = False, 0, 0, 0
        self.per = {"p": HZ // 40, "x": HZ // 10}
        self.due = {}
        self.beat_due = self.run_at = 0
        self.tensioner = Tensioner()

    def tick(self):
        return int((time.monotonic() - self.began) * self.speed * HZ)

    # What is sent.

    def send(self, body):
        body = body.encode("ascii")
        self.out += body + b";%04x\n" % crc(body)

    def numbered(self, form, *fields):
        """4.4, 4.5: a line that there is no room for uses up its number."""
        if len(self.out) > 60000:
            self.dropped += 1
        else:
            self.send(form.format(*fields, seq="%04x" % self.seq))
        self.seq = (self.seq + 1) & 0xFFFF

    def stamp(self, tick):
        return "%08x" % (tick & 0xFFFFFFFF)

    def here(self, why):
        self.send(f"here 1 by-the-book S-1 hz={HZ} ch=2 up={self.stamp(self.tick())} "
                  f"state={'run' if self.running else 'rest'} why={why}")
        for name, what, more in (("p", "pressure kPa 5e-1", " shows=rounded"),
                                 ("x", "extension [in_i] 5e-5", " shows=rounded face=A span=1")):
            lo, hi = LO_HI[name]
            self.send(f"chan {name} {what} lo={lo} hi={hi} per={self.per[name]}{more}")

    def sample(self, name, tick):
        """5.3, 6.5."""
        psi, inches = self.tensioner.at((tick - self.run_at) / HZ)
        count = round(psi * 6.894757293168361 / 0.5) if name == "p" else round(inches / 5e-5)
        lo, hi = LO_HI[name]
        status = "l" if count <= lo else "h" if count >= hi else "g"
        self.numbered("val {} {seq} {} {} {}", name, self.stamp(tick), status, min(max(count, lo), hi))

    # What is heard.

    def hear(self, data, tick):
        for byte in data:
            if byte != 0x0A:
                if len(self.line) < 31:
                    self.line.append(byte)
                else:
                    self.long += 1
                continue
            size = len(self.line) + self.long + 1
            if not (self.long == 0 and self.command(bytes(self.line), tick)):
                self.refused += size  # 7.3
            self.line.clear()
            self.long = 0

    def command(self, line, tick):
        """7. True when the line needs no counting."""
        line = line[:-1] if line.endswith(b"\r") else line  # 2.2
        if not line:
            return True  # 2.9
        if line == b"who":
            self.here("asked")  # 7.9
            return True
        if any(not 0x20 <= byte <= 0x7E for byte in line):
            return False
        parts = re.fullmatch(rb"([^;]*);([0-9a-f]{4})", line)
        if not parts or int(parts[2], 16) != crc(parts[1]):
            return False
        head = re.match(r"([a-z]{2,8}) ([0-9a-f]{2})(?= |$)", parts[1].decode())
        if not head:
            return False
        verb, token = head[1], head[2]
        why = self.obey(verb, token, parts[1].decode()[head.end():], tick)
        if why:
            self.send(f"wont {token} {verb} {why}")
        elif verb != "echo":
            self.send(f"did {token} {verb}")
        return True

    def obey(self, verb, token, rest, tick):
        """7.4 to 7.8. Returns why not, or nothing."""
        if verb not in ("who", "run", "rest", "pace", "echo"):
            return "unknown"
        if verb == "pace":
            return self.pace(rest)
        if rest:
            return "fields"
        if verb == "who":
            self.here("asked")
        elif verb == "echo":
            self.send(f"echo {token} {self.stamp(tick)}")
        elif verb == "run" and not self.running:
            self.running, self.run_at = True, tick
            self.beat_due = tick + HZ
            self.due = {name: tick + per for name, per in self.per.items()}
        elif verb == "rest":
            self.running = False
        return None

    def pace(self, rest):
        fields = re.fullmatch(r" ([a-z]) ([1-9][0-9]{0,6})", rest)
        if not fields:
            return "fields"
        if fields[1] not in self.per:
            return "channel"
        if int(fields[2]) < HZ // 1000:
            return "period"
        self.per[fields[1]] = int(fields[2])
        return None

    # The loop.

    def work(self):
        now = self.tick()
        while self.running:
            name = min(self.due, key=self.due.get)
            when = self.due[name]
            if min(when, self.beat_due) > now:
                break
            if self.beat_due <= when:  # 4.6
                self.numbered("beat {seq} {} {:08x} {:08x}", self.stamp(self.beat_due), self.dropped, self.refused)
                self.beat_due += HZ - HZ // 50
            else:
                self.sample(name, when)
                self.due[name] += self.per[name]

    def run(self):
        self.out += b"\n"  # 2.9
        self.here("power")  # 4.7
        while True:
            wanted = [self.fd] if self.out else []
            readable, writable, _ = select.select([self.fd], wanted, [], 0.001)
            if readable:
                self.hear(os.read(self.fd, 4096), self.tick())
            self.work()
            if writable:
                del self.out[:os.write(self.fd, self.out)]


def main():
    master, port = os.openpty()  # the port's end stays open: a host may come and go
    tty.setraw(port)
    flags = termios.tcgetattr(port)
    flags[3] &= ~termios.ECHO
    termios.tcsetattr(port, termios.TCSANOW, flags)
    os.set_blocking(master, False)
    print(os.ttyname(port), flush=True)
    Device(master, float(sys.argv[1])).run()


if __name__ == "__main__":
    main()
