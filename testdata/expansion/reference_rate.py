#!/usr/bin/python3
"""Rate of the reference toolkit (Debian's python3-rdkit) at running this project's transforms backwards over
the molecules of small.smi and large.smi: transform-molecule pairs tried and distinct precursor sets built
(sanitised, written canonically, no forward check) per second of processor time. Transforms of one product
part are taken, without their words, leaving groups at their first choice. The last line is what
BenchmarkExpand reads as reference.tsv. Run beside the two files: reference_rate.py > reference.tsv"""
import glob
import os
import re
import time

import yaml
from rdkit import Chem, RDLogger
from rdkit.Chem import AllChem

RDLogger.DisableLog("rdApp.*")
here = os.path.dirname(os.path.abspath(__file__))


def reactions():
    for path in sorted(glob.glob(os.path.join(here, "../../rules/transforms/*.yaml"))):
        for t in yaml.safe_load(open(path))["transforms"]:
            if len(t["products"]) != 1:
                continue
            left, right = ".".join(t["reactants"]), t["products"][0]
            choices = t.get("choices") or {}
            for cls, list_ in choices.items():
                if str(cls).isdigit():
                    # a leaving class becomes its first choice, written as it stands
                    left = re.sub(r"\[[^\[\]]*:%s\]" % cls, list_[0], left)
            try:
                r = AllChem.ReactionFromSmarts(f"{right}>>{left}")
                if r.Validate(silent=True)[1] == 0:
                    yield r
            except ValueError:
                continue


def main():
    rs = list(reactions())
    ms = [Chem.MolFromSmiles(s.strip()) for n in ("small.smi", "large.smi") for s in open(os.path.join(here, n)) if s.strip()]
    pairs, built = 0, 0
    start = time.process_time()
    for m in ms:
        for r in rs:
            pairs += 1
            r.RunReactants((m,))
    tried = time.process_time() - start
    start = time.process_time()
    for m in ms:
        for r in rs:
            sets = set()
            for found in r.RunReactants((m,)):
                try:
                    texts = []
                    for x in found:
                        Chem.SanitizeMol(x)
                        texts.append(Chem.MolToSmiles(x))
                    sets.add(".".join(sorted(texts)))
                except Exception:
                    continue
            built += len(sets)
    whole = time.process_time() - start
    print(f"# {len(rs)} transforms, {len(ms)} molecules, {built} precursor sets; pairs/s, precursor sets/s")
    print(f"{pairs / tried:.0f}\t{built / whole:.0f}")


main()
