"""A reader of packs, written from docs/pack.md alone; the standard library is enough.

    python3 reader.py FILE      prints tick,a_counts,b_counts,a_step,b_step,beam,cue, one set-point a line
"""

import struct
import sys
import zlib


class Bytes:
    def __init__(self, data, at=0):
        self.data = data
        self.at = at

    def take(self, form):
        value = struct.unpack_from("<" + form, self.data, self.at)[0]
        self.at += struct.calcsize("<" + form)
        return value

    def number(self):
        value = 0
        for _ in range(10):
            byte = self.take("B")
            value = value << 7 | byte & 0x7F
            if byte < 0x80:
                need(value >> 64 == 0, "a number of more than 64 bits")
                return value
        raise ValueError("a number of more than ten bytes")

    def signed(self):
        return as_signed(self.number())


def as_signed(n):
    return -(n + 1) // 2 if n % 2 else n // 2


def need(fact, what):
    if not fact:
        raise ValueError(what)


class Head:
    def __init__(self, data):
        need(data[:4] == b"PHWT" and data[4] == 1, "no pack of version 1")
        self.size, self.first_block, self.largest, self.tolerance = struct.unpack_from("<4H", data, 8)
        crc = struct.unpack_from("<I", data, self.size - 4)[0]
        need(zlib.crc32(data[: self.size - 4]) == crc, "checksum of the head")
        self.knots = data[5]
        need(self.knots in (0, 1) and data[6] & ~1 == 0, "form or flags")
        self.loops = data[6] & 1 == 1
        self.id, self.ticks, self.loop_start = struct.unpack_from("<IQQ", data, 16)
        self.turns = [struct.unpack_from("<I", data, at)[0] for at in (56, 78)]


class Rotor:
    """Phase, speed and change in 2**-32 counts; rows use whole counts of them."""

    def __init__(self, turn):
        self.turn = turn

    def counts(self):
        return self.phase >> 32

    def move(self):
        before = self.counts()
        self.phase += self.speed
        self.speed += self.change
        step = self.counts() - before
        self.phase %= self.turn << 32
        return step


class Table:
    def __init__(self, data):
        self.data = data
        self.head = Head(data)
        self.rotors = [Rotor(turn) for turn in self.head.turns]

    def blocks(self):
        at, size = self.head.size, self.head.first_block
        while size:
            need(size <= self.head.largest and at + size <= len(self.data), "size of a block")
            block = self.data[at : at + size]
            crc, own, following, flags = struct.unpack_from("<IHHB", block)
            need(zlib.crc32(block[4:]) == crc and own == size and flags & ~1 == 0, "checksum, size or flags of a block")
            yield Bytes(block, 9), flags & 1
            at, size = at + size, following
        need(at == len(self.data), "bytes after the last block")

    def points(self):
        """(tick, positions, steps, beam, cue); the steps over the seam of two blocks are filled in by the caller."""
        for block, _ in self.blocks():
            first, ticks = block.number(), block.number() + 1
            yield from (self.knots if self.head.knots else self.rows)(block, first, ticks)
            need(block.at == len(block.data), "bytes after the last tick of a block")

    def rows(self, block, first, ticks):
        for rotor in self.rotors:
            rotor.phase, rotor.change = block.number() << 32, 0
        for rotor in self.rotors:
            rotor.speed = block.signed() << 32
        run = 0
        for tick in range(first, first + ticks):
            if run == 0:
                run, beam, cue = block.number(), block.take("B"), block.number()
            run -= 1
            both = block.take("B")
            for rotor, half in zip(self.rotors, (both >> 4, both & 15)):
                rotor.speed += (block.signed() if half == 15 else half - 7) << 32
            counts = [rotor.counts() for rotor in self.rotors]
            yield tick, counts, [rotor.move() for rotor in self.rotors], beam, cue

    def knots(self, block, first, ticks):
        for rotor in self.rotors:
            rotor.phase = block.number() << 32
            rotor.phase += block.take("I")
            rotor.speed, rotor.change = block.signed(), block.signed()
            rotor.scale, rotor.grain, rotor.pace = block.take("B"), block.take("B"), block.take("B")
            rotor.left = block.number() + 1
        beam, cue, stay = block.take("B"), block.number(), block.number() + 1
        for tick in range(first, first + ticks):
            counts = [rotor.counts() for rotor in self.rotors]
            now = beam, cue
            steps = [rotor.move() for rotor in self.rotors]
            if tick + 1 < first + ticks:
                for index, rotor in enumerate(self.rotors):
                    rotor.left -= 1
                    if rotor.left == 0:
                        before = rotor.phase >> 32
                        self.piece(block, rotor)
                        steps[index] += (rotor.phase >> 32) - before
                        rotor.phase %= rotor.turn << 32
                stay -= 1
                if stay == 0:
                    n = block.number()
                    stay = n // 4 + 1
                    if n & 1:
                        beam = block.take("B")
                    if n & 2:
                        cue += block.signed()
            yield tick, counts, steps, *now

    @staticmethod
    def piece(block, rotor):
        n = block.number()
        if n:
            rotor.left = n << rotor.pace
            v = block.number()
            more = as_signed(v // 2) << rotor.scale
            rotor.change += more
            rotor.speed += more
            if v % 2:
                rotor.phase += block.signed() << rotor.grain
            return
        what = block.take("B")
        need(what < 16, "a piece with something unknown")
        rotor.left = block.number() + 1
        if what & 1:
            shift = block.take("B")
            rotor.phase = (rotor.phase >> 32 << 32) + (block.signed() << shift)
        if what & 2:
            shift = block.take("B")
            rotor.speed = block.signed() << shift
        if what & 4:
            rotor.scale, rotor.grain, rotor.pace = block.take("B"), block.take("B"), block.take("B")
        change = block.signed() << rotor.scale if what & 8 else 0
        if not what & 2:
            rotor.speed += change - rotor.change
        rotor.change = change


def main():
    with open(sys.argv[1], "rb") as file:
        table = Table(file.read())
    points = list(table.points())
    need([point[0] for point in points] == list(range(table.head.ticks)), "ticks")
    for tick, counts, steps, beam, cue in points:
        follower = points[tick + 1] if tick + 1 < len(points) else points[table.head.loop_start] if table.head.loops else None
        if follower:
            # The nearest step to where the speed led: nothing, but over the seam of two blocks.
            for index, turn in enumerate(table.head.turns):
                gap = (follower[1][index] - counts[index] - steps[index]) % turn
                steps[index] += gap - turn if gap > turn // 2 else gap
        print(tick, *counts, *steps, beam, cue, sep=",")


if __name__ == "__main__":
    main()
