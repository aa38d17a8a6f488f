#!/usr/bin/python3
"""Chooses small.smi and large.smi by size alone from the open structure set of rdkit-data (Debian packages
python3-rdkit and rdkit-data): of all its molecules (one connected piece) of 8-12 heavy atoms fifty at equal
distances in the order of the file, and fifty of 18-22. Run beside the two files: choose.py"""
import os

from rdkit import Chem, RDLogger

RDLogger.DisableLog("rdApp.*")
here = os.path.dirname(os.path.abspath(__file__))
molecules = []
for line in open("/usr/share/RDKit/Data/NCI/first_5K.smi"):
    text = line.split()[0] if line.strip() else ""
    m = Chem.MolFromSmiles(text) if text and "." not in text else None
    if m is not None:
        molecules.append((m.GetNumHeavyAtoms(), text))
for name, low, high in (("small.smi", 8, 12), ("large.smi", 18, 22)):
    fit = [text for size, text in molecules if low <= size <= high]
    with open(os.path.join(here, name), "w") as out:
        out.writelines(fit[i * len(fit) // 50] + "\n" for i in range(50))
    print(f"{name}: 50 of {len(fit)}")
