package spectra

// Group is the kind of a substituent as the additivity tables name it, seen from the atom that
// carries it. The zero Group is a hydrogen.
type Group uint8

// The groups, the general one before its special forms.
const (
	None Group = iota
	Alkyl
	CH3
	CH2R
	CHR2
	CR3
	CH2Ar
	CH2CO
	CH2O
	CH2OCO
	CHRO
	CR2O
	CHO2
	CHRCO
	CH2CH2X
	CH2Hal
	CH2N
	CH2NCO
	CHRN
	CH2S
	CF3
	RingAlkyl
	Vinyl
	VinylConj
	Alkynyl
	Aryl
	Aldehyde
	COR
	CORConj
	COAr
	COOH
	COOHConj
	COOR
	COORConj
	CON
	CONR2
	COCl
	COS
	CN
	CImine
	F
	Cl
	Br
	I
	OH
	OR
	OAr
	OVinyl
	OCOR
	OCOAr
	NH2
	NR2
	NAr
	NRing
	NHCOR
	NR3
	NO2
	NImine
	SH
	SR
	SAr
	SCOR
	SOR
	SO2R
	SO2NR2
	Other
	numGroups
)

// groupNames are the names used in the tables.
var groupNames = [numGroups]string{
	"H", "alkyl", "CH3", "CH2R", "CHR2", "CR3", "CH2Ar", "CH2CO", "CH2O", "CH2OCO", "CHRO", "CR2O", "CHO2", "CHRCO", "CH2CH2X",
	"CH2Hal", "CH2N", "CH2NCO", "CHRN", "CH2S", "CF3", "ring-alkyl", "vinyl", "vinyl-conj", "alkynyl", "aryl", "CHO", "COR", "COR-conj", "COAr",
	"COOH", "COOH-conj", "COOR", "COOR-conj", "CON", "CONR2", "COCl", "COS", "CN", "C=N", "F", "Cl", "Br", "I", "OH", "OR", "OAr", "OVinyl", "OCOR", "OCOAr",
	"NH2", "NR2", "NAr", "N-ring", "NHCOR", "NR3+", "NO2", "N=", "SH", "SR", "SAr", "SCOR", "SOR", "SO2R", "SO2NR2", "other",
}

// String returns the name used in the tables.
func (g Group) String() string { return groupNames[g] }

// general gives for each group the next more general one, whose row serves where a table has none
// for the group itself; None ends the chain.
var general = [numGroups]Group{
	CH3: Alkyl, CH2R: Alkyl, CHR2: Alkyl, CR3: Alkyl, RingAlkyl: Alkyl,
	CH2Ar: CH2R, CH2CO: CH2R, CH2O: CH2R, CH2OCO: CH2O, CHRO: CHR2, CR2O: CR3, CHO2: CHRO, CHRCO: CHR2,
	CH2CH2X: CH2R, CH2Hal: CH2R, CH2N: CH2R, CH2NCO: CH2N, CHRN: CHR2, CH2S: CH2R, CF3: CR3,
	VinylConj: Vinyl, CImine: Vinyl, CORConj: COR, COAr: COR, COOHConj: COOH, COORConj: COOR, COS: COR,
	OAr: OR, OVinyl: OAr, OCOAr: OCOR, OH: OR, NH2: NR2, NAr: NR2, NRing: NAr, NImine: NR2, NHCOR: NR2, NR3: NR2,
	SH: SR, SAr: SR, SCOR: SR, SOR: SR, SO2NR2: SO2R, CONR2: CON, COCl: COR, Aldehyde: COR, Other: None,
}

// groupByName finds a group by its table name.
func groupByName(name string) (Group, bool) {
	for g, n := range groupNames {
		if n == name {
			return Group(g), true
		}
	}
	return None, false
}

// spreadOver fills the groups that a table has no row for from their more general ones.
func spreadOver[T any](rows *[numGroups]T, have *[numGroups]bool) {
	for g := Group(1); g < numGroups; g++ {
		if have[g] {
			continue
		}
		for up := general[g]; up != None; up = general[up] {
			if have[up] {
				rows[g] = rows[up]
				break
			}
		}
	}
}
