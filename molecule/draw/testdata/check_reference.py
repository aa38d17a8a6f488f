#!/usr/bin/python3
"""Reads the drawings of stereo.smi with the reference toolkit (Debian's python3-rdkit): the structures that the
program writes as SD records, places and wedges, must come back as those of the file, stereo included.
usage: check_reference.py PROGRAM   (in this folder)"""
import subprocess
import sys
from rdkit import Chem, RDLogger

RDLogger.DisableLog("rdApp.*")
texts = open("stereo.smi").read().split()
sdf = subprocess.run([sys.argv[1], "convert", "stereo.smi", "--to", "sdf"], capture_output=True, text=True).stdout
blocks = sdf.split("$$$$\n")[:-1]
assert len(blocks) == len(texts), (len(blocks), len(texts))
same = flat = 0
for text, block in zip(texts, blocks):
    want, got = Chem.MolFromSmiles(text), Chem.MolFromMolBlock(block)
    if want is None or got is None:
        print("unread:", text)
        continue
    flat += Chem.MolToSmiles(want, isomericSmiles=False) == Chem.MolToSmiles(got, isomericSmiles=False)
    # marks that mean nothing are dropped on both sides by writing and reading once more
    a, b = (Chem.MolToSmiles(Chem.MolFromSmiles(Chem.MolToSmiles(m))) for m in (want, got))
    if a == b:
        same += 1
    else:
        print("differs:", text, a, b)
print(len(texts), "structures; same constitution", flat, "; same with stereo", same)
