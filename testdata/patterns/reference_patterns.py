#!/usr/bin/python3
"""Counts and times the SMARTS of patterns.yaml with the reference toolkit (Debian's python3-rdkit) in
process on the open structure set of rdkit-data: all unique matches of every pattern in every structure."""
import time
import yaml
from rdkit import Chem, RDLogger

RDLogger.DisableLog("rdApp.*")
patterns = [(p["name"], Chem.MolFromSmarts(p["smarts"]), p) for p in yaml.safe_load(open("patterns.yaml"))["patterns"]]
molecules = [Chem.MolFromSmiles(l.split()[0]) for l in open("/usr/share/RDKit/Data/NCI/first_5K.smi") if l.strip()]
molecules = [m for m in molecules if m is not None]
start = time.process_time()
hits = []
for m in molecules:
    for i, (_, q, _) in enumerate(patterns):
        if m.GetSubstructMatches(q, maxMatches=100000):
            hits.append((m, q))
every = time.process_time() - start
start = time.process_time()
for m, q in hits:
    m.GetSubstructMatches(q, maxMatches=100000)
matching = time.process_time() - start
pairs = len(molecules) * len(patterns)
print(f"pairs {pairs} in {every:.3f} s: {pairs / every:.0f}/s; matching pairs {len(hits)}: {1e6 * matching / len(hits):.2f} us each")
for name, q, p in patterns:
    n = [len(m.GetSubstructMatches(q)) for m in molecules]
    assert (sum(1 for x in n if x), sum(n)) == (p["structures"], p["matches"]), name
