#!/usr/bin/python3
"""Checks the program's canonical strings with the reference toolkit (RDKit, Debian's python3-rdkit and
rdkit-data): read there, each must be the structure that was given, stereo included, and all drawings of
one structure must give one string. The toolkit's own canonical string decides; where it differs (it is not
one string per structure in rings of like centers), the two graphs are laid on each other atom by atom and the marks
compared: 'by mapping'. A mark that the program left out counts as void if either sense of it can be laid on
the structure. Drawings that the toolkit itself reads back as another structure are not used. Sets: the open structure set as it is; random marks on all centers and double
bonds of 2,000 of its molecules, on some of them in every third; all combinations of marks on the symmetric
skeletons below; a file of SMILES, if one is named. Run: check_stereo.py PROGRAM [FILE]; it prints one line per
set and every structure that fell short."""
import itertools
import random
import subprocess
import sys
import tempfile
from rdkit import Chem, RDLogger

RDLogger.DisableLog("rdApp.*")
random.seed(31)
SKELETONS = """CC1CC(C)CC(C)C1 OC1C(O)C(O)C(O)C(O)C1O CC1CC(C)C1 CC1CCC(C)CC1 CC1CCCC(C)C1 CC1C(C)C1C CC1C(C)C(C)C1C CC1C(C)C(C)C(C)C1C
OC(=O)C(O)C(O)C(O)C(O)C(O)=O CC(O)C(O)C(C)O CC(O)C(O)C(O)C(C)O CC(O)C(O)C(O)C(O)C(C)O OC1CC(O)CC(O)C1 OC1C(F)C(O)C(F)C(O)C1F CC=CC(O)C=CC CC=CC(C=CC)C=CC
OC(=O)C1C(c2ccccc2)C(C(O)=O)C1c1ccccc1 OC(=O)C1C(C(O)=O)C(c2ccccc2)C1c1ccccc1 C1CCC2CCCCC2C1 C1CCC2C(C1)CCC1CCCCC12 CC1CCC2(CC1)CCC(C)CC2 CC1CC2(C1)CC(C)C2
CC1CCC(CC1)C1CCC(C)CC1 CC1CC(CC(C1)C(C)O)C(C)O CC(O)C1CCC(CC1)C(C)O C1CC2CCC1CC2 C1CC2CCC1C2 CC1C2CCC1CC2 CC1C2C=CC1CC2 CC=C1CCC(=CC)CC1 CC=C1CC(C)CC(C)C1 CC=C1CCC(C)CC1
CC=CC=CC=CC CC=CC=CC(C)C=CC=CC CS(=O)CCS(C)=O CS(=O)CS(=O)CS(C)=O C1CC2CC1C1C2C2CC1CC2 CC1CC(C)CC(C)CC(C)C1 CC(Cl)C(C(C)Cl)C(C)Cl CC(O)CC(O)CC(C)O CC1OC(C)OC(C)O1 C1OC2COC1CO2
CC1CN(CC(C)O1)c1ccccc1 CC1CCCC(C)N1 CC1CC(C)C(=O)O1 C1CC1C1CC1C CC1CC1C1CC1C CC(F)C=CC(C)F CC(F)C=C=CC(C)F CC=C1CC(=CC)C1 FC1CC2CC(F)CC(C1)C2 O=C1C(C)CC(C)CC1C""".split()


def marked(m, everywhere):
    """m with random marks on its centers and double bonds, or on half of them."""
    w = Chem.RWMol(m)
    Chem.RemoveStereochemistry(w)
    found = list(Chem.FindPotentialStereo(w))
    for x in found:
        if not everywhere and random.random() < 0.5:
            continue
        if x.type == Chem.StereoType.Atom_Tetrahedral:
            w.GetAtomWithIdx(x.centeredOn).SetChiralTag(random.choice([Chem.ChiralType.CHI_TETRAHEDRAL_CW, Chem.ChiralType.CHI_TETRAHEDRAL_CCW]))
        elif x.type == Chem.StereoType.Bond_Double:
            b = w.GetBondWithIdx(x.centeredOn)
            sides = [[n.GetIdx() for n in e.GetNeighbors() if n.GetIdx() != o.GetIdx()] for e, o in ((b.GetBeginAtom(), b.GetEndAtom()), (b.GetEndAtom(), b.GetBeginAtom()))]
            if all(sides):
                b.SetStereoAtoms(sides[0][0], sides[1][0])
                b.SetStereo(random.choice([Chem.BondStereo.STEREOCIS, Chem.BondStereo.STEREOTRANS]))
    m = Chem.MolFromSmiles(Chem.MolToSmiles(w)) if found else None
    return m


def combinations(text):
    """All sets of marks on the potential centers and double bonds of text."""
    m = Chem.MolFromSmiles(text)
    found = [x for x in Chem.FindPotentialStereo(m)]
    seen = {}
    for k, pick in enumerate(itertools.product((0, 1), repeat=len(found))):
        w = Chem.RWMol(m)
        for x, p in zip(found, pick):
            if x.type == Chem.StereoType.Atom_Tetrahedral:
                w.GetAtomWithIdx(x.centeredOn).SetChiralTag([Chem.ChiralType.CHI_TETRAHEDRAL_CW, Chem.ChiralType.CHI_TETRAHEDRAL_CCW][p])
            else:
                b = w.GetBondWithIdx(x.centeredOn)
                a = [n.GetIdx() for n in b.GetBeginAtom().GetNeighbors() if n.GetIdx() != b.GetEndAtomIdx()]
                z = [n.GetIdx() for n in b.GetEndAtom().GetNeighbors() if n.GetIdx() != b.GetBeginAtomIdx()]
                b.SetStereoAtoms(a[0], z[0])
                b.SetStereo([Chem.BondStereo.STEREOCIS, Chem.BondStereo.STEREOTRANS][p])
        s = Chem.MolToSmiles(w)
        for _ in range(4):  # to the end: the toolkit's own string can change when it is read back
            s, before = Chem.CanonSmiles(s), s
            if s == before:
                break
        seen[s] = 1
    return list(seen)


def marks(m):
    """Marks in terms of neighbours: center -> (ligands, sense), double bond -> (ends, sides, together)."""
    centers, bonds = {}, {}
    for a in m.GetAtoms():
        if a.GetChiralTag() in (Chem.ChiralType.CHI_TETRAHEDRAL_CW, Chem.ChiralType.CHI_TETRAHEDRAL_CCW):
            centers[a.GetIdx()] = ([b.GetOtherAtomIdx(a.GetIdx()) for b in a.GetBonds()], a.GetChiralTag() == Chem.ChiralType.CHI_TETRAHEDRAL_CW)
    for b in m.GetBonds():
        if b.GetStereo() in (Chem.BondStereo.STEREOZ, Chem.BondStereo.STEREOCIS, Chem.BondStereo.STEREOE, Chem.BondStereo.STEREOTRANS):
            bonds[frozenset((b.GetBeginAtomIdx(), b.GetEndAtomIdx()))] = (list(b.GetStereoAtoms()), b.GetStereo() in (Chem.BondStereo.STEREOZ, Chem.BondStereo.STEREOCIS))
    return centers, bonds


def odd(p):
    return sum(p[i] > p[j] for i in range(len(p)) for j in range(i + 1, len(p))) % 2 == 1


def agree(m, a, b, at):
    """The marks of b that a lacks, where the atom map at lays a on b and all marks of a agree; else None."""
    for c, (ligands, sense) in a[0].items():
        if at[c] not in b[0]:
            return None
        there, want = b[0][at[c]]
        if sense ^ odd([there.index(at[l]) for l in ligands]) != want:
            return None
    for e, (sides, together) in a[1].items():
        f = frozenset(at[x] for x in e)
        if f not in b[1]:
            return None
        there, want = b[1][f]
        turned = sum(at[x] not in there for x in sides)
        if together ^ (turned == 1) != want:
            return None
    return [c for c in b[0] if c not in {at[x] for x in a[0]}], [f for f in b[1] if f not in {frozenset(at[x] for x in e) for e in a[1]}]


def mapped(given, ours):
    """Whether ours, whose marks may be fewer, is given: some atom map makes the marks agree, the rest is void."""
    plain = Chem.Mol(ours)
    Chem.RemoveStereochemistry(plain)
    bare = Chem.Mol(given)
    Chem.RemoveStereochemistry(bare)
    a, b = marks(ours), marks(given)
    selfmaps = None
    for at in bare.GetSubstructMatches(plain, uniquify=False, maxMatches=100000):
        missing = agree(given, a, b, at)
        if missing is None:
            continue
        if not missing[0] and not missing[1]:
            return True
        selfmaps = selfmaps or bare.GetSubstructMatches(bare, uniquify=False, maxMatches=100000)
        void = True
        for flips in itertools.product((False, True), repeat=len(missing[0]) + len(missing[1])):
            c, d = dict(b[0]), dict(b[1])
            for x, f in zip(missing[0], flips):
                c[x] = (c[x][0], c[x][1] ^ f)
            for x, f in zip(missing[1], flips[len(missing[0]):]):
                d[x] = (d[x][0], d[x][1] ^ f)
            void = void and any(agree(given, b, (c, d), y) is not None for y in selfmaps)
        if void:
            return True
    return False


def check(name, texts, program):
    structures = [(t, Chem.MolFromSmiles(t)) for t in texts]
    structures = [(t, m) for t, m in structures if m is not None and m.GetNumAtoms()]
    drawings = []
    for t, m in structures:
        tries = [Chem.MolToSmiles(m, doRandom=True, canonical=False) for _ in range(3)]
        drawings.append([t] + [d if mapped(m, Chem.MolFromSmiles(d)) and mapped(Chem.MolFromSmiles(d), m) else t for d in tries])
    with tempfile.NamedTemporaryFile("w", suffix=".smi") as f:
        f.write("\n".join(d for row in drawings for d in row) + "\n")
        f.flush()
        out = [l.split()[0] if l.strip() else "" for l in subprocess.run([program, "convert", f.name, "--to", "smiles"], capture_output=True, text=True).stdout.split("\n")]
    one = same = by_map = 0
    for i, (t, m) in enumerate(structures):
        four = set(out[4 * i:4 * i + 4])
        read = [Chem.MolFromSmiles(x) if x else None for x in four]
        equal = {Chem.MolToSmiles(x) if x is not None else "" for x in read} == {Chem.MolToSmiles(m)}
        laid = not equal and all(x is not None and mapped(m, x) for x in read)
        one, same, by_map = one + (len(four) == 1), same + equal, by_map + laid
        if len(four) != 1 or not (equal or laid):
            print("SHORT", name, Chem.MolToSmiles(m), sorted(set(drawings[i])), sorted(four))
    print(f"{name}: {len(structures)} structures; one string {one}; the same structure {same + by_map}, of these by mapping {by_map}")


program = sys.argv[1]
lines = [l.split()[0] for l in open("/usr/share/RDKit/Data/NCI/first_5K.smi") if l.strip()]
check("open set", lines, program)
pool = [m for m in (Chem.MolFromSmiles(l) for l in lines) if m is not None and len(list(Chem.FindPotentialStereo(m)))]
random.shuffle(pool)
texts = []
for k, m in enumerate(pool[:2000]):
    for _ in range(3):
        w = marked(m, k % 3 > 0)
        if w is not None:
            texts.append(Chem.MolToSmiles(w))
print(f"molecules with random marks: {min(len(pool), 2000)}")
check("random marks", sorted(set(texts)), program)
check("symmetric skeletons", [s for t in SKELETONS for s in combinations(t)], program)
if len(sys.argv) > 2:
    check(sys.argv[2], [l.split()[0] for l in open(sys.argv[2]) if l.strip()], program)
