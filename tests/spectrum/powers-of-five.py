#!/usr/bin/python3
"""The table of powers of five by which decimals are rounded, against whole numbers of any length. Argument: the C file that holds it. Without one it
is printed, three to a line, as it stands there."""
import re
import sys

FIRST, LAST = -64, 64


def floor_log2(numerator, denominator):
    """The largest whole e for which 2^e is at most the fraction."""
    e = numerator.bit_length() - denominator.bit_length()
    return e if (numerator << max(-e, 0)) >= (denominator << max(e, 0)) else e - 1


def entry(power):
    """The first 128 bits of 5^power, and the power of two of its first bit."""
    numerator, denominator = 5 ** max(power, 0), 5 ** max(-power, 0)
    log2 = floor_log2(numerator, denominator)
    shift = 127 - log2
    return (numerator << max(shift, 0)) // (denominator << max(-shift, 0)), log2


def table():
    entries = ["{ 0x%016x, 0x%016x }" % divmod(entry(power)[0], 1 << 64) for power in range(FIRST, LAST + 1)]
    return "".join("  " + ", ".join(entries[i:i + 3]) + ",\n" for i in range(0, len(entries), 3))


def main():
    if len(sys.argv) < 2:
        print(table(), end="")
        return 0
    with open(sys.argv[1], encoding="ascii") as file:
        source = file.read()
    found = [(int(high, 16) << 64) + int(low, 16) for high, low in re.findall(r"\{ 0x([0-9a-f]{16}), 0x([0-9a-f]{16}) \}", source)]
    first, last = (int(re.search(rf"#define {name} (-?\d+)", source).group(1)) for name in ("FIRST_POWER", "LAST_POWER"))
    factor = int(re.search(r"#define LOG2_OF_5_65536 (\d+)", source).group(1))
    checks = [("the table has an entry for each power", len(found) == last - first + 1),
              ("every entry holds the first 128 bits of its power", found == [entry(power)[0] for power in range(first, last + 1)]),
              ("the power of two is that of the first bit", all(power * factor >> 16 == entry(power)[1] for power in range(first, last + 1)))]
    print(f"1..{len(checks)}")
    for number, (name, passed) in enumerate(checks, 1):
        print(f"{'ok' if passed else 'not ok'} {number} - {name}")
    return 0 if all(passed for _, passed in checks) else 1


sys.exit(main())
