package name

import (
	"math/rand/v2"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// written names and their structures. The P- numbers name the rule of the 2013 recommendations that the
// example belongs to, from memory; names without one follow from the same rules (common practice).
var named = []struct{ smiles, name, rule string }{
	{"CC(C)O", "propan-2-ol", "P-63.1.2"},
	{"CCCC(C)CC(=O)CC", "5-methyloctan-3-one", "P-64.2"},
	{"CCCC(C)C(=O)CC", "4-methylheptan-3-one", "P-64.2"},
	{"O=C(O)CCCCC(C)=O", "6-oxoheptanoic acid", "P-65.1.2"},
	{"CCOC(=O)C(C)C(=O)CC", "ethyl 2-methyl-3-oxopentanoate", "P-65.6.3"},
	{"CC(=O)Nc1ccc(O)cc1", "N-(4-hydroxyphenyl)acetamide", "P-66.1.1.3"},
	{"CC(C)(C)CC", "2,2-dimethylbutane", "P-44.3"},
	{"C=CC=C", "buta-1,3-diene", "P-31.1.4"},
	{"C=CCC#C", "pent-1-en-4-yne", "P-31.1.4.2.4"},
	{"CC(C)(C)c1ccc(C(C)C)cc1", "1-tert-butyl-4-(propan-2-yl)benzene", "P-29.6"},
	{"OCC(O)CO", "propane-1,2,3-triol", "P-63.1.2"},
	{"OC(=O)CC(C(=O)O)C(O)=O", "ethane-1,1,2-tricarboxylic acid", "P-65.1.2.2"},
	{"CC(C(=O)O)C(=O)O", "2-methylpropanedioic acid", "P-65.1.2"},
	{"ClCC(=O)O", "chloroacetic acid", "P-65.1.1.1"},
	{"ClCC(=O)N", "2-chloroacetamide", "P-66.1.1.1"},
	{"O=C(O)c1ccccc1", "benzoic acid", "P-65.1.1.1"},
	{"Nc1ccc(C(=O)O)cc1", "4-aminobenzoic acid", "P-65.1.1.1"},
	{"Oc1ccc(C=O)cc1", "4-hydroxybenzaldehyde", "P-66.6.1"},
	{"O=Cc1ccco1", "furan-2-carbaldehyde", "P-66.6.1"},
	{"N#CCCCCC#N", "hexanedinitrile", "P-66.5.1"},
	{"N#CCC(=O)O", "cyanoacetic acid", "P-66.5.1.2"},
	{"CN(C)C=O", "N,N-dimethylformamide", "P-66.1.1.3"},
	{"CCN(CC)CC", "N,N-diethylethanamine", "P-62.2.1"},
	{"CC(C)NCc1ccccc1", "N-benzylpropan-2-amine", "P-62.2.1"},
	{"NCCCCCCN", "hexane-1,6-diamine", "P-62.2.4"},
	{"c1ccc(Nc2ccccc2)cc1", "N-phenylaniline", "P-62.2.1"},
	{"COc1ccccc1", "anisole", "P-63.2.4.1"},
	{"CCOCC", "ethoxyethane", "P-63.2.2"},
	{"CSCC", "(methylsulfanyl)ethane", "P-63.2.5"},
	{"CS(=O)(=O)Cl", "methanesulfonyl chloride", "P-65.5.2"},
	{"Cc1ccc(S(N)(=O)=O)cc1", "4-methylbenzene-1-sulfonamide", "P-66.1.1.2"},
	{"O=C1CCCCC1", "cyclohexanone", "P-64.3"},
	{"CC1CCCCC1=O", "2-methylcyclohexan-1-one", "P-31.1.4"},
	{"O=C1C=CCCC1", "cyclohex-2-en-1-one", "P-31.1.4"},
	{"C1CC2CCC1C2", "bicyclo[2.2.1]heptane", "P-23.2"},
	{"C1CCC2(CC1)OCCO2", "1,4-dioxaspiro[4.5]decane", "P-24.2"},
	{"C1CCC2CCCCC2C1", "decahydronaphthalene", "P-31.1.4.2.4"},
	{"O=C1CCCc2ccccc12", "3,4-dihydronaphthalen-1(2H)-one", "P-31.1.4.3.4"},
	{"O=C1Cc2ccccc2N1", "1,3-dihydro-2H-indol-2-one", "P-31.1.4.3.4"},
	{"O=C1NC(=O)c2ccccc12", "1H-isoindole-1,3(2H)-dione", "P-66.2.1"},
	{"O=C1CCC(=O)N1", "pyrrolidine-2,5-dione", "P-66.2.1"},
	{"Cn1cnc2c1c(=O)n(C)c(=O)n2C", "1,3,7-trimethyl-3,7-dihydro-1H-purine-2,6-dione", "P-25.2.1"},
	{"c1ccc2[nH]ccc2c1", "1H-indole", "P-25.2.1"},
	{"c1ccc2scnc2c1", "1,3-benzothiazole", "P-25.2.2.4"},
	{"c1nc2cnccc2[nH]1", "1H-imidazo[4,5-c]pyridine", "P-25.2.2"},
	{"c1ncc2cn[nH]c2n1", "1H-pyrazolo[3,4-d]pyrimidine", "P-25.3.1"},
	{"C1COCCN1", "morpholine", "P-22.2.1"},
	{"C1CO1", "oxirane", "P-22.2.2"},
	{"c1cocn1", "1,3-oxazole", "P-22.2.2"},
	{"NC(=O)NC", "N-methylurea", "P-66.1.6.1.1"},
	{"CCOC(=O)Nc1ccccc1", "ethyl N-phenylcarbamate", "P-65.2.1"},
	{"COC(=O)OC", "dimethyl carbonate", "P-65.2.3"},
	{"NNc1ccccc1", "phenylhydrazine", "P-68.3.1.2"},
	{"CC(C)=NO", "N-(propan-2-ylidene)hydroxylamine", "P-68.3.1.1"},
	{"CC(C)=NNC(N)=O", "2-(propan-2-ylidene)hydrazine-1-carboxamide", "P-68.3.1.2"},
	{"c1ccc(N=Nc2ccccc2)cc1", "diphenyldiazene", "P-68.3.1.3"},
	{"O=C=Nc1ccccc1", "isocyanatobenzene", "P-61.8"},
	{"CC[N+](=O)[O-]", "nitroethane", "P-61.5"},
	{"CCN=[N+]=[N-]", "azidoethane", "P-61.7"},
	{"[O-][n+]1ccccc1", "pyridine 1-oxide", "P-62.5"},
	{"C[Si](C)(C)Cl", "chloro(trimethyl)silane", "P-68.2.2"},
	{"CCCCCCCCCCCCCCCCCCCCC", "henicosane", "P-21.2"},
}

func TestNames(t *testing.T) {
	for _, c := range named {
		m := mustRead(t, c.smiles)
		if got := Of(m); got != c.name {
			t.Errorf("%s: got %q, want %q (%s)", c.smiles, got, c.name, c.rule)
		}
		r, err := Read(c.name)
		if err != nil {
			t.Errorf("%v", err)
		} else if r.FlatKey() != m.FlatKey() {
			t.Errorf("%s reads as %s, want %s", c.name, smiles.Write(r), c.smiles)
		}
	}
}

func mustRead(t *testing.T, s string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(s)
	if err != nil {
		t.Fatalf("%s: %v", s, err)
	}
	return m
}

// other ways to write names, old locants and trivial names (common practice).
var readOnly = []struct{ name, smiles string }{
	{"2-propanol", "CC(C)O"},
	{"1,3-Propanediol", "OCCCO"},
	{"1-hexene", "C=CCCCC"},
	{"Acetone", "CC(C)=O"},
	{"toluene", "Cc1ccccc1"},
	{"4-bromotoluene", "Cc1ccc(Br)cc1"},
	{"adipic acid", "OC(=O)CCCCC(=O)O"},
	{"dimethyl adipate", "COC(=O)CCCCC(=O)OC"},
	{"diethyl malonate", "CCOC(=O)CC(=O)OCC"},
	{"ethyl acetoacetate", "CCOC(=O)CC(C)=O"},
	{"benzyl alcohol", "OCc1ccccc1"},
	{"ethyl methyl ketone", "CCC(C)=O"},
	{"diethyl ether", "CCOCC"},
	{"benzyl bromide", "BrCc1ccccc1"},
	{"acetyl chloride", "CC(=O)Cl"},
	{"triethylamine", "CCN(CC)CC"},
	{"tetrahydrofuran", "C1CCOC1"},
	{"pyrrole", "c1cc[nH]c1"},
	{"indole", "c1ccc2[nH]ccc2c1"},
	{"di-tert-butyl dicarbonate", "CC(C)(C)OC(=O)OC(=O)OC(C)(C)C"},
	{"methyl 2-[4-(2-methylpropyl)phenyl]propanoate", "COC(=O)C(C)c1ccc(CC(C)C)cc1"},
	{"hexachlorobenzene", "Clc1c(Cl)c(Cl)c(Cl)c(Cl)c1Cl"},
	{"propenal", "C=CC=O"},
	{"phenylmethanamine", "NCc1ccccc1"},
}

func TestReadVariants(t *testing.T) {
	for _, c := range readOnly {
		r, err := Read(c.name)
		if err != nil {
			t.Errorf("%v", err)
		} else if r.FlatKey() != mustRead(t, c.smiles).FlatKey() {
			t.Errorf("%s reads as %s, want %s", c.name, smiles.Write(r), c.smiles)
		}
	}
}

// TestReadErrors: what is ambiguous or impossible is refused in one line, not guessed.
func TestReadErrors(t *testing.T) {
	for _, s := range []string{
		"", "x", "chloropyridine", "thiophenamine", "bromochlorobenzene", "pentanol", "hydrocinnamoic acid", "6-methylpentane",
		"2,2,2-trimethylpropane", "(R)-propan-2-ol", "(2R)-butan-1-ol", "(E)-propene", "cis-but-2-ene", "methyl", "ethyl", "acetate", "benzoyl", "2,3-dichloro",
		"1-(methylbenzene", "propan-2-ol)", "ethyl methyl acetate", "3H-pyridine", "1,2-dihydrohexane",
		"methane methane", "peroxyacetic acid", "benzyloxymethyl chloride", "dimethylacetamide", "phosphoryl chloride", "zinc", "lithium", "ethylmagnesium", "amine", "sulfate", "methylmercury", strings.Repeat("(", 400), strings.Repeat("di", 240), strings.Repeat("methyl", 80), "naïve",
	} {
		m, err := Read(s)
		if err == nil {
			t.Errorf("%q was read as %s", s, smiles.Write(m))
		} else if strings.ContainsAny(err.Error(), "\n\r") {
			t.Errorf("%q: the error has several lines", s)
		}
	}
}

// TestRefused: what lies outside has no name rather than a wrong one.
func TestRefused(t *testing.T) {
	for _, s := range []string{"[13CH4]", "[CH3]", "C[Fe]C", "*C", "C[N+](C)(C)CC([O-])=O", "FS(F)(F)(F)(F)F"} {
		if got := Of(mustRead(t, s)); got != "" {
			t.Errorf("%s is named %s", s, got)
		}
	}
}

// TestNumbering: the name does not depend on the order of the atoms.
func TestNumbering(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 11))
	for _, c := range named {
		m := mustRead(t, c.smiles)
		for range 5 {
			ranks := make([]int32, m.NumAtoms())
			for i, x := range rng.Perm(len(ranks)) {
				ranks[i] = int32(x)
			}
			s := smiles.WriteInOrder(m, ranks)
			if got := Of(mustRead(t, s)); got != c.name {
				t.Errorf("%s, written %s: %q, want %q", c.smiles, s, got, c.name)
			}
		}
	}
}

func FuzzRead(f *testing.F) {
	for _, c := range named {
		f.Add(c.name)
	}
	for _, c := range readOnly {
		f.Add(c.name)
	}
	f.Fuzz(func(t *testing.T, s string) {
		m, err := Read(s)
		if err != nil {
			return
		}
		name := Of(m)
		if name == "" {
			return
		}
		r, err := Read(name)
		if err != nil || r.FlatKey() != m.FlatKey() {
			t.Fatalf("%q is named %q, which reads otherwise: %v", s, name, err)
		}
	})
}
