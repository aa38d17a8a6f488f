#!/usr/bin/python3
"""Rate of the reference toolkit (Debian's python3-rdkit) at reading and writing canonical SMILES, on the
open structure set of rdkit-data, in structures per second of processor time."""
import time
from rdkit import Chem, RDLogger

RDLogger.DisableLog("rdApp.*")
texts = [l.split()[0] for l in open("/usr/share/RDKit/Data/NCI/first_5K.smi") if l.strip()]
start = time.process_time()
for s in texts:
    m = Chem.MolFromSmiles(s)
    if m is not None:
        Chem.MolToSmiles(m)
print(f"{len(texts) / (time.process_time() - start):.0f} structures/s")
