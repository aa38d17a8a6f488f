#!/usr/bin/python3
"""Compares names with an independent reader of names (Debian: libopsin-java), through the reference toolkit.

    SHELFWARD_NAMES=FILE.smi go test ./molecule/name -run TestDump     # writes FILE.smi.out: SMILES, tab, name
    check.py FILE.smi.out [--reader READER.jar]

A name is right if the independent reader gives the same constitution back. Wrong names are listed.
"""
import argparse
import subprocess

from rdkit import Chem, RDLogger

RDLogger.DisableLog("rdApp.*")


def flat(text):
    """Canonical SMILES without stereo, or None."""
    m = Chem.MolFromSmiles(text or "")
    if m is None or m.GetNumAtoms() == 0:
        return None
    Chem.RemoveStereochemistry(m)
    return Chem.MolToSmiles(m)


def main():
    p = argparse.ArgumentParser()
    p.add_argument("file")
    p.add_argument("--reader", default="/usr/share/java/opsin-cli.jar")
    a = p.parse_args()
    rows = [line.rstrip("\n").split("\t") for line in open(a.file)]
    named = [(s, n) for s, n in rows if n]
    read = subprocess.run(["java", "-jar", a.reader, "-osmi"], input="\n".join(n for _, n in named) + "\n", capture_output=True, text=True)
    back = read.stdout.split("\n")[: len(named)]
    wrong = [(s, n, b) for (s, n), b in zip(named, back) if flat(b) != flat(s)]
    print(f"{len(rows)} structures, named {len(named)} ({len(named) / len(rows):.1%}), right {len(named) - len(wrong)} ({1 - len(wrong) / max(1, len(named)):.2%} of those)")
    for s, n, b in wrong:
        print("wrong:", s, "|", n, "|", b)


main()
