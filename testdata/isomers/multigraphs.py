#!/usr/bin/python3
"""Counts isomers with programs that share nothing with ours and writes multigraphs.tsv.

Method: connected simple graphs (nauty-geng), coloured by element in all ways (nauty-vcolg), bonds made
double or triple in all ways (nauty-multig), kept where no atom exceeds its valence; what is left of the
valences is hydrogen. That counts Kekulé forms; the reference toolkit's canonical strings then merge
those of aromatic compounds. Needs Debian's nauty and python3-rdkit. Run: ./multigraphs.py > multigraphs.tsv
"""
import random
import subprocess

from rdkit import Chem, RDLogger

RDLogger.DisableLog("rdApp.*")
VALENCE = {"C": 4, "N": 3, "O": 2, "S": 2, "F": 1, "Cl": 1, "Br": 1, "P": 3}
ORDER = [None, Chem.BondType.SINGLE, Chem.BondType.DOUBLE, Chem.BondType.TRIPLE]


def multigraphs(atoms, hydrogens):
    """Yields (elements, bonds) for a dict of heavy atoms and a number of hydrogens."""
    elements = sorted(atoms, key=lambda e: (-VALENCE[e], e))
    n = sum(atoms.values())
    stubs = sum(VALENCE[e] * k for e, k in atoms.items()) - hydrogens
    if stubs < 0 or stubs % 2 or stubs // 2 < n - 1:
        return
    bonds = stubs // 2
    if n == 1:
        if bonds == 0:
            yield elements, []
        return
    counts = ",".join(str(atoms[e]) for e in elements)
    degrees = ",".join(str(VALENCE[e]) for e in elements)
    colour, heed = f"| nauty-vcolg -q -T -c{counts} -D{degrees}", "-V"
    if len(elements) == 1:
        colour = heed = ""  # nauty 2.8.6 loses regular multigraphs of one colour here
    line = (f"nauty-geng -c -q -D4 {n} {n - 1}:{min(bonds, n * (n - 1) // 2)} {colour}"
            f" | nauty-multig -q {heed} -T -e{bonds} -m3 -D4")
    out = subprocess.run(line, shell=True, capture_output=True, text=True, check=True).stdout
    for text in out.splitlines():
        x = [int(w) for w in text.split()]
        colours, rest = (x[2:2 + n], x[2 + n:]) if heed else ([0] * n, x[2:])
        names = [elements[c] for c in colours]
        used, list_ = [0] * n, []
        for i in range(0, len(rest), 3):
            a, b, m = rest[i:i + 3]
            used[a] += m
            used[b] += m
            list_.append((a, b, m))
        if all(u <= VALENCE[e] for u, e in zip(used, names)):
            yield names, list_


def string(names, bonds):
    m = Chem.RWMol()
    used = [0] * len(names)
    for a, b, k in bonds:
        used[a] += k
        used[b] += k
    for e, u in zip(names, used):
        a = Chem.Atom(e)
        a.SetNoImplicit(True)
        a.SetNumExplicitHs(VALENCE[e] - u)
        m.AddAtom(a)
    for a, b, k in bonds:
        m.AddBond(a, b, ORDER[k])
    m = m.GetMol()
    Chem.SanitizeMol(m)
    return Chem.MolToSmiles(m)


def main():
    random.seed(11)
    print("# Isomers by standard valences (C4 N3 O2 S2 P3 halogen 1). Formula, multigraphs (every Kekulé form counts), compounds (aromatic")
    print("# forms merged by the reference toolkit's canonical strings). Made by multigraphs.py with nauty 2.8.6; random formulas, seed 11.")
    seen = set()
    while len(seen) < 60:
        n = random.randint(2, 7)
        atoms = {"C": n}
        for e in random.sample(["N", "O", "S", "F", "Cl", "P", "N", "O"], random.randint(0, 3)):
            atoms[e] = random.randint(1, 2)
        heavy = sum(atoms.values())
        top = 2 + sum((VALENCE[e] - 2) * k for e, k in atoms.items())
        h = top - 2 * random.randint(0, 5)
        if heavy > 8 or h < 0:
            continue
        f = "C" + (str(n) if n > 1 else "") + ("H" + (str(h) if h > 1 else "") if h else "")
        f += "".join(e + (str(k) if k > 1 else "") for e, k in sorted(atoms.items()) if e != "C")
        if f in seen:
            continue
        count, strings = 0, set()
        for names, bonds in multigraphs(atoms, h):
            count += 1
            if count > 60000:
                break
            strings.add(string(names, bonds))
        if count > 60000:
            continue
        seen.add(f)
        print(f"{f}\t{count}\t{len(strings)}", flush=True)


main()
