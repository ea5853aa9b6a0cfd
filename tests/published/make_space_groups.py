#!/usr/bin/python3
"""Makes space_groups.tsv and space_group_symbols.tsv beside this file from two general-purpose
crystallographic libraries that share no tables: gemmi and cctbx (Debian: python3-gemmi,
python3-cctbx). They must agree with each other on everything that is written.

    tests/published/make_space_groups.py

Rows and Hall symbols of the 530 settings are read from space_groups.tsv itself (the numbering of
the database that the program uses). Only the numbering is taken from there: the operations are
built by each library from the Hall symbol (S. R. Hall, Acta Cryst. A37 (1981) 517; International
Tables B, 1.4).
"""
from pathlib import Path

import gemmi
from cctbx import sgtbx

FOLDER = Path(__file__).parent
LETTERS = {2: "2", 4: "4", 6: "6", 8: "8", 12: "c", 16: "g", 24: "o", 48: "M"}


def planes():
    """Axes to 6, zones with every mix of parities and of 4n, general planes of either sign."""
    pairs = [(1, 2), (2, 1), (1, 3), (2, 4), (4, 2), (3, 1), (3, 3), (4, 4), (1, 5), (2, 6)]
    chosen = [(h, k, l) for h in range(3) for k in range(3) for l in range(3)]
    for n in range(1, 7):
        chosen += [(n, 0, 0), (0, n, 0), (0, 0, n), (n, n, 0), (n, -n, 0), (n, n, n), (n, 0, -n)]
    for a, b in pairs:
        chosen += [(a, b, 0), (a, 0, b), (0, a, b), (a, a, b), (a, -a, b), (a, b, a), (b, a, a)]
        chosen += [(a, b, -a - b), (-a, b, 0), (a, 0, -b), (0, -a, b)]
    chosen += [(1, 2, 3), (-1, 2, 3), (1, -2, 3), (1, 2, -3), (3, 1, 2), (2, -3, 5), (-4, 1, 3)]
    chosen += [(4, 2, 1), (5, 3, 1), (2, 4, 6), (-2, 1, 4), (-1, 2, 6), (3, -1, 5), (6, 1, -2)]
    return [h for h in dict.fromkeys(chosen) if any(h)]


def letters(hall, chosen):
    """One letter a plane: "." absent, else its multiplicity with Friedel pairs."""
    ops = gemmi.symops_from_hall(hall)
    group = sgtbx.space_group(hall)
    text = ""
    for h in chosen:
        absent = ops.is_systematically_absent(list(h))
        assert absent == group.is_sys_absent(h), (hall, h)
        images = {tuple(op.apply_to_hkl(list(h))) for op in ops.sym_ops}
        images |= {tuple(-i for i in h) for h in images}
        assert len(images) == group.multiplicity(h, False), (hall, h)
        text += "." if absent else LETTERS[len(images)]
    return text


def operations(hall):
    return frozenset(
        (tuple(map(tuple, op.rot)), tuple(t % op.DEN for t in op.tran))
        for op in gemmi.symops_from_hall(hall))


def write_groups(rows, chosen):
    lines = ["# Absences and multiplicities, see make_space_groups.py.",
             "# gemmi %s and cctbx agree on every letter." % gemmi.__version__,
             "# row, number, operations, has an inversion, Hall symbol, one letter a plane:",
             "# . absent; 2 4 6 8, c 12, g 16, o 24, M 48: multiplicity with Friedel pairs",
             "planes\t" + " ".join("%d,%d,%d" % h for h in chosen)]
    for row, hall in rows:
        group = sgtbx.space_group(hall)
        assert operations(hall) == operations_of(group), hall
        lines.append("%d\t%d\t%d\t%d\t%s\t%s" % (
            row, group.type().number(), group.order_z(), group.is_centric(), hall,
            letters(hall, chosen)))
    (FOLDER / "space_groups.tsv").write_text("\n".join(lines) + "\n")


def operations_of(group):
    found = set()
    for i in range(group.order_z()):
        op = group(i).mod_positive()
        r, t, f = op.r(), op.t(), gemmi.Op.DEN
        rotation = tuple(
            tuple(r.num()[3 * j + k] * f // r.den() for k in range(3)) for j in range(3))
        found.add((rotation, tuple(n * f // t.den() % f for n in t.num())))
    return frozenset(found)


def write_symbols(rows, chosen):
    by_operations = {}
    for row, hall in rows:
        by_operations.setdefault(operations(hall), row)
    named = {}
    for group in gemmi.spacegroup_table():
        named.setdefault(group.xhm(), group.hall)
        if operations(group.hall) in by_operations:
            named.setdefault(group.hall, group.hall)
            if group.ext == "\0":
                named.setdefault(group.short_name(), group.hall)
    for symbols in sgtbx.space_group_symbol_iterator():
        hall = symbols.hall().strip()
        named.setdefault(symbols.universal_hermann_mauguin().replace(" :", ":"), hall)
        named.setdefault(hall, hall)
    lines = ["# Symbols of gemmi %s and cctbx, see make_space_groups.py." % gemmi.__version__,
             "# symbol, row with the same operations; 0: no row has them, then operations, letters"]
    for symbol, hall in named.items():
        row = by_operations.get(operations(hall), 0)
        rest = "" if row else "\t%d\t%s" % (len(operations(hall)), letters(hall, chosen))
        lines.append("%s\t%d%s" % (symbol, row, rest))
    (FOLDER / "space_group_symbols.tsv").write_text("\n".join(lines) + "\n")


def main():
    fields = [line.split("\t") for line in (FOLDER / "space_groups.tsv").read_text().splitlines()]
    rows = [(int(f[0]), f[4]) for f in fields if len(f) == 6]
    write_groups(rows, planes())
    write_symbols(rows, planes())


main()
