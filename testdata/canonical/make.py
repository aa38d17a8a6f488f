#!/usr/bin/env python3
"""Makes reference.tsv with the reference toolkit (RDKit, Debian package python3-rdkit; data: the first
molecules of its open NCI set, every twelfth, and the list below). Columns: three drawings of one
molecule (the third a Kekule form where there is one), one drawing of a molecule that differs in one mark, charge,
hydrogen or atom, formula, 'aromatic atoms rings'. Run: make.py > reference.tsv"""
import random
import re
from rdkit import Chem, RDLogger
from rdkit.Chem.rdMolDescriptors import CalcMolFormula

RDLogger.DisableLog("rdApp.*")
random.seed(20)
OWN = """C[C@H](N)C(=O)O OC(=O)[C@H](O)[C@@H](O)C(=O)O C/C=C/C=C\\C CC(/C=C/C1=C(C)CCCC1(C)C)=C\\C=C\\C(C)=C\\CO C[S@](=O)c1ccccc1
C[C@@]12CC[C@H]3[C@@H](CCc4cc(O)ccc34)[C@@H]1CC[C@@H]2O OC[C@H]1O[C@H](O)[C@H](O)[C@@H](O)[C@@H]1O C1CC2CCC1C2 C12C3C4C1C5C2C3C45
c1ccc2cccc2cc1 c1ccc2c(c1)ccc1c2ccc2c1ccc1ccccc12 O=C1C=CC(=O)C=C1 O=c1cccccc1 C1=CC2=CC3=CC=C(N3)C=C4C=CC(=N4)C=C5C=CC(=CC1=N2)N5
Cn1cnc2c1c(=O)n(C)c(=O)n2C Nc1ncnc2[nH]cnc12 [O-][n+]1ccccc1 C[n+]1ccccc1.[I-] [Na+].[O-]c1ccccc1 C[Mg]Br [Li]CCCC CP(C)(C)=O CS(=O)(=O)Cl
B(O)(O)c1ccccc1 C[Si](C)(C)C#C [Se]1C=CC=C1 c1cc[te]c1 [13CH3]C(=O)O [2H]C(Cl)(Cl)Cl C[N@]1CC1C O=C1O[C@H]([C@@H](O)CO)C(O)=C1O
C[C@H]1CC[C@H](C(C)C)C[C@@H]1O C[C@]12CC[C@H](CC1=O)C2(C)C CC1=CC[C@@H]2C[C@H]1C2(C)C F/C(Cl)=C(\\Br)I C/C=N/O CC(C)=N/N=C/C OC1CCCCC1
C1CCC/C=C/CC1 C1CCC/C=C\\CC1 N#CC(C#N)=C(C#N)C#N [O-][N+](=O)c1ccccc1 CN=[N+]=[N-] [N-]=[N+]=Cc1ccccc1 C[N+]#[C-] OB1OB(O)OB(O)O1""".split()


def wrong(m):
    """A molecule that differs: a mark flipped, or an atom changed."""
    w = Chem.RWMol(m)
    marks = [a for a in w.GetAtoms() if a.GetChiralTag() in (Chem.ChiralType.CHI_TETRAHEDRAL_CW, Chem.ChiralType.CHI_TETRAHEDRAL_CCW)]
    if marks:
        a = random.choice(marks)
        a.InvertChirality()
    else:
        ends = [a for a in w.GetAtoms() if a.GetDegree() == 1 and a.GetAtomicNum() in (6, 8, 9, 17, 35) and not a.GetIsotope() and not a.GetFormalCharge()]
        if not ends:
            return None
        a = random.choice(ends)
        if a.GetAtomicNum() == 6 and a.GetTotalNumHs() == 3:
            a.SetAtomicNum(9); a.SetNoImplicit(False)
        else:
            a.SetIsotope(18)
    try:
        Chem.SanitizeMol(w)
    except Exception:
        return None
    return None if Chem.MolToSmiles(w) == Chem.MolToSmiles(m) else w.GetMol()


def hill(m):
    """Hill order; the toolkit puts hydrogen first where there is no carbon."""
    f = CalcMolFormula(m)
    if "C" in {a.GetSymbol() for a in m.GetAtoms()}:
        return f
    parts = re.findall(r"([A-Z][a-z]?)(\d*)", f)
    return "".join(a + n for a, n in sorted(parts)) + re.sub(r"^[A-Za-z0-9]*", "", f)


lines = [l.split()[0] for l in open("/usr/share/RDKit/Data/NCI/first_5K.smi")][::12]
print("# drawing\tdrawing\tdrawing (Kekule)\tanother molecule\tformula\taromatic atoms and rings; made by make.py")
for s in lines + OWN:
    m = Chem.MolFromSmiles(s)
    if m is None:
        continue
    m = Chem.MolFromSmiles(Chem.MolToSmiles(m))
    k = Chem.Mol(m)
    Chem.Kekulize(k, clearAromaticFlags=True)
    w = wrong(m)
    if w is None or any(a.GetIsotope() for a in m.GetAtoms()) and "+" in s:
        continue
    draw = [Chem.MolToSmiles(x, doRandom=True, canonical=False, kekuleSmiles=x is k) for x in (m, m, k, w)]
    if len({Chem.CanonSmiles(d) for d in draw[:3]}) != 1:
        continue
    f = re.sub(r"([+-])(\d+)$", r"(\2\1)", hill(m))
    ar = sum(a.GetIsAromatic() for a in m.GetAtoms())
    rings = m.GetNumBonds() - m.GetNumAtoms() + len(Chem.GetMolFrags(m))
    print("\t".join(draw + [f, f"{ar} {rings}"]))
