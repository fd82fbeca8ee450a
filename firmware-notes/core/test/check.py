#!/usr/bin/env python3
"""Checks the core on this machine: the shared vectors, the conduct that SPEC asks of
a device over time, and a card. usage: check.py PROGRAM (see desk.c)"""

import random
import sys
import unittest

from desk import CHANNELS, Desk, check, octets, records, sealed, vectors

PROGRAM = sys.argv.pop(1)


def desk():
    return Desk(PROGRAM)


def of(word, list_):
    return [r for r in list_ if r[0] == word]


class Vectors(unittest.TestCase):
    def test_commands(self):
        """Each command of commands.json to a board of its own."""
        seen = 0
        for v in vectors("commands.json"):
            line = octets(v.get("line", ""))
            if v["way"] == "write" or line.strip(b"\r\n") == b"":
                continue  # an empty line is no command (SPEC 2.9)
            seen += 1
            with self.subTest(v["name"]), desk() as d:
                d.boot()
                sent = records(d.hear(line))
                refused = self.refused(d)
                self.assertEqual(refused, 0 if "command" in v or "answer" in v else len(line))
                self.answered(v, sent)
        self.assertGreaterEqual(seen, 50)

    def refused(self, d):
        """The board's count, from its beat."""
        sent = records(d.command("run 77") + d.do("pass 1000000 1000"))
        return int(of("beat", sent)[-1][4], 16)

    def answered(self, v, sent):
        command, answer = v.get("command"), v.get("answer")
        if command and command.get("token") is None:
            self.assertEqual([r[0] for r in sent], ["here", "chan", "chan"])
        elif command and command["verb"] == "echo":
            self.assertEqual(sent, [["echo", "%02x" % command["token"], "00000000"]])
        elif command and command["verb"] == "pace" and not (command["channel"] == "a" and command["period"] >= 1000):
            why = "channel" if command["channel"] > "b" else "period"
            self.assertEqual(sent, [["wont", "%02x" % command["token"], "pace", why]])
        elif command:
            self.assertEqual(sent[-1], ["did", "%02x" % command["token"], command["verb"]])
        elif answer:
            known = answer["verb"] in ("who", "run", "rest", "pace", "echo")
            self.assertEqual(sent, [["wont", "%02x" % answer["token"], answer["verb"], "fields" if known else "unknown"]])
        else:
            self.assertEqual(sent, [])

    def test_records(self):
        """Each line of encode.json that a board of this core can say, byte for byte."""
        seen = set()
        for v in vectors("encode.json"):
            r = v["record"]
            if "line" not in v or r["word"] in ("note", "unknown"):
                continue  # refusals are the host's; the core sends neither of the two
            seen.add(r["word"])
            with self.subTest(v["name"]), desk() as d:
                self.assertEqual(getattr(self, r["word"])(d, r), octets(v["line"]))
        self.assertEqual(seen, {"val", "btn", "beat", "did", "wont", "echo", "here", "chan"})

    def val(self, d, r):
        limit = {"l": f"{r.get('count')} 9999999", "h": f"-9999999 {r.get('count')}"}.get(r["status"], "-10000000 10000000")
        d.boot(channels=[(limit + " 1000 1", "x")] * 26, running=1)
        d.do(f"set seq {r['seq']}")
        if r["status"] in "glh":
            d.do(f"read {r['channel']} {r['tick']} {r['count']}")
        else:
            d.do(f"{'absent' if r['status'] == 'x' else 'fault'} {r['channel']} {r['tick']}")
        return d.do("poll")

    def btn(self, d, r):
        d.boot()
        pushed = r["edge"] == "down"
        if not pushed:
            for _ in range(16):
                d.do(f"look {r['button']} 1")
            d.do("poll")
        d.do(f"tick {r['tick']}")
        d.do("poll")
        d.do(f"set seq {r['seq']}")
        for _ in range(16):
            d.do(f"look {r['button']} {int(pushed)}")
        return d.do("poll")

    def beat(self, d, r):
        d.boot(running=1)
        for name in ("seq", "dropped", "refused"):
            d.do(f"set {name} {r[name]}")
        d.do(f"tick {r['tick']}")
        return d.do("poll")

    def did(self, d, r):
        d.boot()
        body = f"{r['verb']} {r['token']:02x}" + (" a 5000" if r["verb"] == "pace" else "")
        return d.command(body).splitlines(True)[-1]

    def wont(self, d, r):
        numbers = "5 6 5000 5000" if r["why"] == "period" else "5 6 5000 1"
        d.boot(channels=[(numbers, "x")])
        rest = {"unknown": "", "fields": " x", "channel": " z 5000", "period": " a 9"}.get(r["why"])
        if rest is None:
            self.skipTest("a reason that the core does not give")
        return d.command(f"{r['verb']} {r['token']:02x}{rest}")

    def echo(self, d, r):
        d.boot()
        d.do(f"tick {r['tick']}")
        return d.command(f"echo {r['token']:02x}")

    def here(self, d, r):
        causes = ["unknown", "asked", "power", "reset", "brown", "watchdog"]
        d.do(f"here here {r['version']} {r['model']} {r['serial']} hz={r['hz']} ch={r['ch']} up={{now}} state={{state}} why={{cause}}")
        d.do("id " + str(r.get("boot", "")))
        d.do(f"tick {r['up']}")
        d.do(f"boot {causes.index(r['why'])} {int(r['state'] == 'run')}")
        return d.do("poll")

    def chan(self, d, r):
        more = "".join(
            f" {key}={r[key]}"
            for key, default in (("res", 1), ("zero", 0), ("shows", "unknown"), ("face", ""), ("span", 0), ("sn", ""))
            if r[key] != default
        )
        what = f"{r['quantity']} {r['unit']} {r['mantissa']}e{r['exponent']}"
        text = f"{what} lo={r['lo']} hi={r['hi']} per={{per}}{more}"
        numbers = f"{r['lo']} {r['hi']} {r['per']} 1"
        index = ord(r["channel"]) - 97
        d.boot(channels=[("1 2 3 4", "x")] * index + [(numbers, text)])
        return d.hear(b"who\n").splitlines(True)[-1]


class Conduct(unittest.TestCase):
    def test_boot_says_who_is_there(self):
        with desk() as d:
            sent = d.boot(cause=4, tick=0x1E240)
            self.assertEqual(sent[:1], b"\n")
            self.assertEqual([r[0] for r in records(sent)], ["here", "chan", "chan"])
            self.assertIn(b" up=0001e240 state=rest why=brown boot=0000002a;", sent)
            self.assertEqual(d.do("pass 3000000 1000"), b"", "at rest it is silent")

    def test_no_numbered_line_before_the_description_is_out(self):
        with desk() as d:
            d.do("room 130")
            d.board()
            d.do("boot 2 1")
            d.do("read a 1 5")
            self.assertEqual([r[0] for r in records(d.do("poll"))], ["here"])
            words = []
            for _ in range(4):
                d.do("room 120")
                words += [r[0] for r in records(d.do("poll"))]
            self.assertEqual(words, ["chan", "chan", "val"])

    def test_beats_once_a_second_across_the_wrap(self):
        with desk() as d:
            d.boot(tick=0xFFFFFFFF - 5_000_000)
            list_ = records(d.command("run 01") + d.do("pass 10000000 997"))
            ticks = [int(r[2], 16) for r in of("beat", list_)]
            gaps = {(b - a) % 2**32 for a, b in zip(ticks, ticks[1:])}
            self.assertLess(max(gaps), 1_000_000)
            self.assertGreaterEqual(len(ticks), 10)
            self.assertEqual([int(r[1], 16) for r in of("beat", list_)], list(range(len(ticks))))

    def test_a_busy_line_drops_the_oldest_whole_and_counts(self):
        with desk() as d:
            d.boot(running=1)
            d.do("room 0")
            for i in range(50):
                d.do(f"read a {1000 * (i + 1)} {i}")
            self.assertEqual(d.do("poll"), b"")
            d.do("room 255")
            list_ = records(d.do("pass 1000000 1000"))
            self.assertEqual([(r[2], r[5]) for r in of("val", list_)], [("%04x" % n, str(n)) for n in range(46, 50)])
            self.assertEqual(of("beat", list_)[0][3], "%08x" % 46)

    def test_every_amount_of_room_gives_whole_lines(self):
        """Room comes in dribs; what goes out is the same as with endless room."""
        def talk(d, drib):
            out = b""
            d.do(f"room {drib}")
            d.board()
            d.do("id 1")
            d.do("boot 3 1")
            for i in range(3):
                d.do(f"read a {100 * i + 7} {12345 * i}")
            for _ in range(40):
                out += d.do("poll")
                d.do(f"room {drib}")
            return out

        with desk() as d:
            whole = talk(d, 255)
        for drib in range(120, 255):
            with desk() as d:
                self.assertEqual(talk(d, drib), whole, drib)

    def test_answers_are_never_dropped_and_need_no_number(self):
        with desk() as d:
            d.boot(running=1)
            d.do("room 0")
            for i in range(20):
                d.do(f"read a {i + 1} {i}")
            d.do("hear " + sealed("who 09").hex())
            d.do("room 255")
            list_ = records(d.do("poll"))
            self.assertEqual([r[0] for r in list_], ["here", "chan", "chan", "did", "val", "val", "val", "val"])

    def test_rest_sends_what_waits_and_then_its_answer(self):
        with desk() as d:
            d.boot(running=1)
            d.do("room 0")
            for i in range(3):
                d.do(f"read a {i + 1} {i}")
            d.do("hear " + sealed("rest 0c").hex())
            d.do("read a 9 9")
            d.do("room 255")
            list_ = records(d.do("poll"))
            self.assertEqual([r[0] for r in list_], ["val", "val", "val", "did"])

    def test_pace(self):
        with desk() as d:
            d.boot()
            self.assertEqual(records(d.command("pace 01 a 20000")), [["did", "01", "pace"]])
            self.assertIn("per=20000", of("chan", records(d.hear(b"who\n")))[0])
            self.assertEqual(records(d.command("pace 02 a 999")), [["wont", "02", "pace", "period"]])
            self.assertEqual(records(d.command("pace 03 b 200000")), [["wont", "03", "pace", "period"]], "its own time")
            self.assertEqual(records(d.command("pace 04 c 20000")), [["wont", "04", "pace", "channel"]])
            self.assertIn("per=20000", of("chan", records(d.hear(b"who\n")))[0])
            self.assertIn("per=10000", of("chan", records(d.do("boot 3 0") + d.do("poll")))[0], "until the next boot")

    def test_a_command_in_two_parts(self):
        line = sealed("echo 5a")
        for cut in range(1, len(line)):
            with desk() as d:
                d.boot()
                self.assertEqual(d.hear(line[:cut]), b"")
                self.assertEqual(records(d.hear(line[cut:])), [["echo", "5a", "00000000"]])

    def test_no_answer_to_what_is_no_line_or_no_word(self):
        bodies = (b"jump 01 \x07", b"jump 01 \x7f", b"jump 01 \xe9", b"abcdefghi 01", b"j 01", b"jump 0A", b"jump 0`", b" jump 01")
        with desk() as d:
            d.boot(running=1)
            for body in bodies:
                self.assertEqual(d.command(body), b"", body)
            self.assertEqual(records(d.command("abcdefgh 01")), [["wont", "01", "abcdefgh", "unknown"]])
            beat = of("beat", records(d.do("pass 1000000 1000")))[0]
            self.assertEqual(int(beat[4], 16), sum(len(b) + 6 for b in bodies))

    def test_a_second_command_waits_for_the_answer_to_the_first(self):
        with desk() as d:
            d.boot()
            d.do("room 0")
            d.do("hear " + sealed("echo 11").hex())
            d.do("hear " + sealed("run 22").hex())  # given up by the board's own ring
            d.do("room 255")
            self.assertEqual(records(d.do("poll")), [["echo", "11", "00000000"]])
            self.assertEqual(records(d.command("rest 33")), [["did", "33", "rest"]])

    def test_bytes_lost_on_the_board_are_counted(self):
        with desk() as d:
            d.boot(running=1)
            d.do("lost 200")
            d.do("set refused 4294967200")
            d.do("lost 200")
            list_ = records(d.do("pass 1000000 1000"))
            self.assertEqual(of("beat", list_)[0][4], "ffffffff")

    def test_noise_and_floods_leave_it_alive(self):
        """Ten thousand bytes of noise, then a good command; the count is exact."""
        for seed in range(10):
            rng = random.Random(seed)
            noise = bytes(rng.choice(b"\r\n; who01234abcdef\xff\x00" if seed % 2 else range(256)) for _ in range(10_000)) + b"\n"
            lines = noise.split(b"\n")[:-1]
            refused = sum(len(l) + 1 for l in lines if l not in (b"", b"\r", b"who", b"who\r"))
            with desk() as d:
                d.boot()
                records(d.hear(noise))
                self.assertEqual(records(d.command("echo 01"))[-1][0], "echo")
                list_ = records(d.command("run 02") + d.do("pass 1000000 1000"))
                self.assertEqual(int(of("beat", list_)[0][4], 16), refused, seed)

    def test_a_good_command_after_a_broken_one(self):
        good = sealed("echo 07")
        for at in range(len(good) - 1):
            for bit in range(8):
                broken = bytearray(good)
                broken[at] ^= 1 << bit
                if broken[at] == 10:
                    continue  # two lines then; noise covers it
                with desk() as d:
                    d.boot()
                    self.assertEqual(d.hear(bytes(broken)), b"")
                    self.assertEqual(records(d.hear(good)), [["echo", "07", "00000000"]])

    def test_a_button_bounces_once(self):
        with desk() as d:
            d.boot()
            out = b""
            looks = [0] * 5 + [1, 0, 1, 1, 0] + [1] * 40 + [0, 1, 0] + [0] * 30 + [1] * 10 + [0] * 30
            for ms, pushed in enumerate(looks):
                d.do(f"tick {1000 * ms}")
                out += d.do("poll") + d.do(f"look 1 {pushed}")
            out += d.do("poll")
            edges = [(r[3], r[4]) for r in records(out)]
            self.assertEqual(edges, [("%08x" % 10_000, "down"), ("%08x" % 52_000, "up")])


class Sensors(unittest.TestCase):
    def walk(self, d, name, ticks, step=500):
        """Ticks at which the sensor's sample is due."""
        due, now = [], int(self.tick)
        for _ in range(ticks // step):
            now += step
            d.do(f"tick {now % 2**32}")
            d.do("poll")
            if d.raw(f"due {name}") == "1":
                due.append(now)
        self.tick = now
        return due

    def test_in_step_with_its_period_across_the_wrap(self):
        for start in (0, 2**32 - 50_000):
            self.tick = start
            with desk() as d:
                d.boot(tick=start, running=1)
                due = self.walk(d, "a", 200_000, 700)
                self.assertEqual(len(due), 19)
                for n, tick in enumerate(due):
                    self.assertLess(abs(tick - start - 10_000 * (n + 1) - 700), 1400)

    def test_due_before_the_first_poll_at_any_tick(self):
        for start in (0, 2**31, 2**32 - 60_000_000):
            with desk() as d:
                d.board()
                d.do(f"tick {start}")
                d.do("boot 2 1")
                self.assertEqual(d.raw("due a"), "0")
                d.do(f"tick {start + 10_000}")
                self.assertEqual(d.raw("due a"), "1")

    def test_a_missing_sensor_is_asked_once_a_second(self):
        self.tick = 0
        with desk() as d:
            d.boot(running=1)
            d.do("absent a 1")
            due = self.walk(d, "a", 5_100_000, 5000)
            self.assertEqual(len(due), 5)
            d.do(f"read a {self.tick} 5")
            self.assertGreaterEqual(len(self.walk(d, "a", 100_000)), 9)

    def test_one_that_sends_by_itself_is_missed_after_its_silence(self):
        self.tick = 0
        with desk() as d:
            d.boot(running=1)
            for _ in range(20):
                d.do(f"read b {self.tick + 1} 5")
                self.assertEqual(self.walk(d, "b", 100_000), [])
            self.assertEqual(len(self.walk(d, "b", 1_200_000, 5000)), 1)

    def test_out_of_range_is_held_at_the_limit(self):
        with desk() as d:
            d.boot(running=1)
            for i, count in enumerate((-201, -200, -199, 15199, 15200, 2_000_000)):
                d.do(f"read a {i + 1} {count}")
                self.assertEqual(records(d.do("poll"))[0][4:], [["l", "-200"], ["l", "-200"], ["g", "-199"], ["g", "15199"], ["h", "15200"], ["h", "15200"]][i])

    def test_ticks_rise_in_a_channel(self):
        with desk() as d:
            d.boot(running=1)
            for tick in (5000, 5000, 4000, 5001):
                d.do(f"read b {tick} 7")
            self.assertEqual([r[3] for r in records(d.do("poll"))], ["00001388", "00001389"])


class Card(unittest.TestCase):
    def log(self, d, seconds, cause=2):
        d.board()
        d.do("id 7")
        opened = d.raw("card 2 40")
        d.do("tick 0")
        d.do(f"boot {cause} 1")
        for ms in range(0, 1000 * seconds, 10):
            d.do(f"tick {1000 * ms + 1000}")
            d.do(f"read a {1000 * ms + 1000} {ms}")
            d.do("poll")
            d.do("flush 500000")
        return opened

    def text(self, d):
        return d.do("dump").translate(None, b"\x00")

    def test_a_log_reads_back_whole(self):
        with desk() as d:
            self.assertEqual(self.log(d, 3), "1")
            d.do("tick 9000000")
            d.do("flush 1")
            list_ = records(self.text(d))
            self.assertEqual([r[0] for r in list_[:3]], ["here", "chan", "chan"])
            self.assertIn("state=run", list_[0])
            self.assertEqual([r[5] for r in of("val", list_)], [str(ms) for ms in range(0, 3000, 10)])

    def test_the_next_boot_writes_on_behind(self):
        with desk() as d:
            self.log(d, 1)
            d.do("flush 1")
            first = self.text(d)
            self.log(d, 1, cause=5)
            d.do("flush 1")
            self.assertTrue(self.text(d).startswith(first))
            self.assertEqual([r[8] for r in of("here", records(self.text(d)))], ["why=power", "why=watchdog"])

    def test_a_full_card_ends_after_a_whole_line(self):
        with desk() as d:
            self.log(d, 10)
            d.do("flush 1")
            text = self.text(d)
            self.assertEqual(len(text), 38 * 512)
            records(text)
            self.assertEqual(self.log(d, 1), "0")
            self.assertEqual(self.text(d), text)

    def test_a_stuck_card_costs_whole_lines_that_are_counted(self):
        with desk() as d:
            self.log(d, 1)
            d.do("stuck 1")
            for ms in range(1000, 2000, 10):
                d.do(f"tick {1000 * ms + 1000}")
                d.do(f"read a {1000 * ms + 1000} {ms}")
                d.do("poll")
                d.do("flush 500000")
            d.do("stuck 0")
            d.do("pass 1000000 10000")
            d.do("flush 1")
            list_ = records(self.text(d))
            numbers = [int(r[2] if r[0] == "val" else r[1], 16) for r in list_ if r[0] in ("val", "beat")]
            lost = numbers[-1] + 1 - len(numbers)
            self.assertGreater(lost, 50)
            self.assertEqual(int(of("beat", list_)[-1][3], 16), lost)


if __name__ == "__main__":
    assert check(b"123456789") == b"29b1"  # SPEC 2.6
    unittest.main()
