#!/usr/bin/python3
"""Writes reference_labels.tsv: labels that the reference toolkit (Debian's python3-rdkit,
rdCIPLabeler) gives to stereoisomers made by random marks on structures of rdkit-data.

Columns: SMILES, labels of the marked atoms in the order of the SMILES, labels of the marked double
bonds in the order of their first atoms. Run: python3 reference_labels.py > reference_labels.tsv
"""
import random
from rdkit import Chem, RDLogger
from rdkit.Chem import rdCIPLabeler

RDLogger.DisableLog("rdApp.*")
random.seed(7)
lines = [l.split() for l in open("/usr/share/RDKit/Data/NCI/first_5K.smi") if l.strip()]
random.shuffle(lines)
done = 0
# Skeletons whose centres hang on one another (rules 3 to 5), many of their isomers.
skeletons = """OCC(O)C(O)C(O)CO OCC(O)C(O)C(O)C(O)CO OC(=O)C(O)C(O)C(O)C(O)C(=O)O CC(O)C(O)C(O)C CC(O)C(O)C(O)C(O)C(O)C(O)C
OC1C(O)C(O)C(O)C(O)C1O CC1CC(C)CC(C)C1 CC1CCC(C)CC1 CC1CC1C CC1C(C)C1C CC=CC(O)C=CC CC=CC(C=CC)C(O)C(C=CC)C=CC
CC(O)C(C)C(C(C)O)C(C)O CC(Cl)C(O)C(C)Cl CC(O)C(C(C)O)C(C(C)O)C(C)O OC1CC(O)CC(O)C1 OC1CCC2(CC1)CCC(O)CC2 C1CCC2CCCCC2C1
C1CCC2C(C1)CCC1CCCCC12 OC1CC2CCC1C2 CC(F)C(C(C)F)(C(C)F)C(C)Cl CC(F)C(O)C(C(C)F)C(O)C(C)F CC=C1CC(C)C1 CC=C1CCC(=CC)CC1
CC(O)C=C(C(C)O)C(C)O CC(O)CC(CC(C)O)CC(C)N OC1C(N)C(O)C(N)C(O)C1N c1ccccc1C1C(C(=O)O)C(c2ccccc2)C1C(=O)O
CC(O)C(O)C(C)C(O)C(O)C CC(C)C(O)C([2H])C(O)C(C)C CC1OC(C)OC(C)O1 C1CC2CCC1CC2C(O)C OC(C1CC1C)C1CC1C OC(C1CCC(C)C1)C1CCC(C)C1
C1CC1C(O)C(=C)O C=CC(O)C1CC1 CC1CC(C)C1C(O)C1C(C)CC1C CC(O)C(N(C(C)O)C(C)O)C(C)O N1=CC=CC1C1C=CC=N1 CC(c1ncccn1)c1ncccc1
CC(c1ccncn1)c1ncncc1 CC(c1cc[nH]c1)c1ccoc1 CC(C1=NC=CN1)c1nccs1 CC(c1cccc2ccccc12)c1ccc2ccccc2c1 OC(c1ccncc1)c1cccnc1""".split()

Chem.SetUseLegacyStereoPerception(False)
TAGS = [Chem.ChiralType.CHI_TETRAHEDRAL_CW, Chem.ChiralType.CHI_TETRAHEDRAL_CCW]
SIDES = [Chem.BondStereo.STEREOCIS, Chem.BondStereo.STEREOTRANS]


def randomly_marked(m):
    """m with a random mark wherever a mark could mean something."""
    m = Chem.RWMol(m)
    for x in Chem.FindPotentialStereo(m):
        if x.type == Chem.StereoType.Atom_Tetrahedral:
            m.GetAtomWithIdx(x.centeredOn).SetChiralTag(random.choice(TAGS))
        elif x.type == Chem.StereoType.Bond_Double:
            b = m.GetBondWithIdx(x.centeredOn)
            ligands = [[n.GetIdx() for n in end.GetNeighbors() if n.GetIdx() != other.GetIdx()][0]
                       for end, other in ((b.GetBeginAtom(), b.GetEndAtom()), (b.GetEndAtom(), b.GetBeginAtom()))]
            b.SetStereoAtoms(*ligands)
            b.SetStereo(random.choice(SIDES))
    return m


lines = [(s, "all") for s in skeletons] + lines
for smiles, *rest in lines:
    m = Chem.MolFromSmiles(smiles)
    if m is None or m.GetNumAtoms() > 40:
        continue
    count = 40 if rest == ["all"] else 2
    isomers = [Chem.MolFromSmiles(s) for s in sorted({Chem.MolToSmiles(randomly_marked(m)) for _ in range(count)})]
    for x in isomers:
        text = Chem.MolToSmiles(x)
        x = Chem.MolFromSmiles(text)
        rdCIPLabeler.AssignCIPLabels(x)
        order = list(x.GetAtoms())
        centers = [a.GetProp("_CIPCode") if a.HasProp("_CIPCode") else "?" for a in order
                   if a.GetChiralTag() != Chem.ChiralType.CHI_UNSPECIFIED]
        bonds = sorted((b for b in x.GetBonds() if b.GetStereo() > Chem.BondStereo.STEREOANY),
                       key=lambda b: min(b.GetBeginAtomIdx(), b.GetEndAtomIdx()))
        axes = [b.GetProp("_CIPCode") if b.HasProp("_CIPCode") else "?" for b in bonds]
        if centers or axes:
            print(text, ",".join(centers), ",".join(axes), sep="\t")
            done += 1
    if done > 3600:
        break
