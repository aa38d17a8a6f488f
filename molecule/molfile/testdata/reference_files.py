#!/usr/bin/python3
"""Writes reference.sdf: records by the reference toolkit (Debian's python3-rdkit), in turn V2000 and
V3000, drawn flat with wedges and in space, with Kekule and with aromatic bonds. The field SMILES
holds the structure. Also reference_2.rxn and reference_3.rxn, one reaction in both forms.
Run in this folder."""
import random
from rdkit import Chem, RDLogger
from rdkit.Chem import AllChem

RDLogger.DisableLog("rdApp.*")
random.seed(3)
texts = [l.rstrip("\n").split("\t")[1] for l in open("../../cip/testdata/named.tsv") if not l.startswith("#")]
nci = [l.split()[0] for l in open("/usr/share/RDKit/Data/NCI/first_5K.smi") if l.strip()]
texts += [s for s in random.sample(nci, 400) if len(s) < 45][:60]
texts += ["[13CH3][C@H]([2H])O", "[Na+].[O-]C(=O)C", "C[N+](C)(C)C.[Cl-]", "[CH3]", "C[S@](=O)c1ccccc1", "[Cu+2].[Cl-].[Cl-]",
          "C[Mg]Br", "[O-][n+]1ccccc1", "CN=[N+]=[N-]", "C[P@](=O)(O)CC", "F/C=C/C=C\\Cl", "OB(O)c1ccccc1", "[NH4+].[OH-]", "[CH3:1][OH:2]"]
with open("reference.sdf", "w") as out:
    for i, s in enumerate(texts):
        m = Chem.MolFromSmiles(s)
        if m is None:
            continue
        three, form = i % 2 == 1, i % 3
        if form == 2:
            m = Chem.AddHs(m)
            if AllChem.EmbedMolecule(m, randomSeed=5) >= 0:
                s = Chem.MolToSmiles(Chem.MolFromMolBlock(Chem.MolToMolBlock(m)))
            else:
                m = Chem.RemoveHs(m)
                AllChem.Compute2DCoords(m)
        else:
            AllChem.Compute2DCoords(m)
        block = Chem.MolToMolBlock(m, forceV3000=three, kekulize=form == 0)
        out.write(block + "> <SMILES>\n%s\n\n$$$$\n" % s)
r = AllChem.ReactionFromSmarts("[CH3:1][C:2](=[O:3])[OH:4].[CH3:5][CH2:6][OH:7]>>[CH3:1][C:2](=[O:3])[O:7][CH2:6][CH3:5].[OH2:4]", useSmiles=True)
for t in list(r.GetReactants()) + list(r.GetProducts()):
    t.UpdatePropertyCache()
    AllChem.Compute2DCoords(t)
open("reference_2.rxn", "w").write(AllChem.ReactionToRxnBlock(r))
open("reference_3.rxn", "w").write(AllChem.ReactionToV3KRxnBlock(r))
