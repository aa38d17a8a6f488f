package molecule

// element is one row of the table below.
type element struct {
	symbol         string
	weight         float64 // standard atomic weight, g/mol; 0: no stable isotope
	monoisotopicDa float64 // mass of the most abundant isotope, Da
}

// elements is indexed by atomic number. Weights: IUPAC Commission on Isotopic Abundances and Atomic
// Weights (CIAAW), Standard Atomic Weights 2021, abridged to five figures (conventional values for
// elements given as an interval). Isotope masses: atomic mass evaluation as tabulated by NIST.
// Values from memory; the weights and masses were compared with the reference toolkit's table.
var elements = [119]element{
	{"*", 0, 0},
	{"H", 1.008, 1.00782503223},
	{"He", 4.0026, 4.00260325413},
	{"Li", 6.94, 7.0160034366},
	{"Be", 9.0122, 9.012183065},
	{"B", 10.81, 11.00930536},
	{"C", 12.011, 12},
	{"N", 14.007, 14.00307400443},
	{"O", 15.999, 15.99491461957},
	{"F", 18.998, 18.99840316273},
	{"Ne", 20.180, 19.9924401762},
	{"Na", 22.990, 22.9897692820},
	{"Mg", 24.305, 23.985041697},
	{"Al", 26.982, 26.98153853},
	{"Si", 28.085, 27.97692653465},
	{"P", 30.974, 30.97376199842},
	{"S", 32.06, 31.9720711744},
	{"Cl", 35.45, 34.968852682},
	{"Ar", 39.95, 39.9623831237},
	{"K", 39.098, 38.9637064864},
	{"Ca", 40.078, 39.962590863},
	{"Sc", 44.956, 44.95590828},
	{"Ti", 47.867, 47.94794198},
	{"V", 50.942, 50.94395704},
	{"Cr", 51.996, 51.94050623},
	{"Mn", 54.938, 54.93804391},
	{"Fe", 55.845, 55.93493633},
	{"Co", 58.933, 58.93319429},
	{"Ni", 58.693, 57.93534241},
	{"Cu", 63.546, 62.92959772},
	{"Zn", 65.38, 63.92914201},
	{"Ga", 69.723, 68.9255735},
	{"Ge", 72.630, 73.921177761},
	{"As", 74.922, 74.92159457},
	{"Se", 78.971, 79.9165218},
	{"Br", 79.904, 78.9183376},
	{"Kr", 83.798, 83.9114977282},
	{"Rb", 85.468, 84.9117897379},
	{"Sr", 87.62, 87.9056125},
	{"Y", 88.906, 88.9058403},
	{"Zr", 91.224, 89.9046977},
	{"Nb", 92.906, 92.9063730},
	{"Mo", 95.95, 97.90540482},
	{"Tc", 0, 0},
	{"Ru", 101.07, 101.9043441},
	{"Rh", 102.91, 102.9054980},
	{"Pd", 106.42, 105.9034804},
	{"Ag", 107.87, 106.9050916},
	{"Cd", 112.41, 113.90336509},
	{"In", 114.82, 114.903878776},
	{"Sn", 118.71, 119.90220163},
	{"Sb", 121.76, 120.9038120},
	{"Te", 127.60, 129.906222748},
	{"I", 126.90, 126.9044719},
	{"Xe", 131.29, 131.9041550856},
	{"Cs", 132.91, 132.9054519610},
	{"Ba", 137.33, 137.90524700},
	{"La", 138.91, 138.9063563},
	{"Ce", 140.12, 139.9054431},
	{"Pr", 140.91, 140.9076576},
	{"Nd", 144.24, 141.9077290},
	{"Pm", 0, 0},
	{"Sm", 150.36, 151.9197397},
	{"Eu", 151.96, 152.9212380},
	{"Gd", 157.25, 157.9241123},
	{"Tb", 158.93, 158.9253547},
	{"Dy", 162.50, 163.9291819},
	{"Ho", 164.93, 164.9303288},
	{"Er", 167.26, 165.9302995},
	{"Tm", 168.93, 168.9342179},
	{"Yb", 173.05, 173.9388664},
	{"Lu", 174.97, 174.9407752},
	{"Hf", 178.49, 179.9465570},
	{"Ta", 180.95, 180.9479958},
	{"W", 183.84, 183.95093092},
	{"Re", 186.21, 186.9557501},
	{"Os", 190.23, 191.9614770},
	{"Ir", 192.22, 192.9629216},
	{"Pt", 195.08, 194.9647917},
	{"Au", 196.97, 196.96656879},
	{"Hg", 200.59, 201.97064340},
	{"Tl", 204.38, 204.9744278},
	{"Pb", 207.2, 207.9766525},
	{"Bi", 208.98, 208.9803991},
	{"Po", 0, 0},
	{"At", 0, 0},
	{"Rn", 0, 0},
	{"Fr", 0, 0},
	{"Ra", 0, 0},
	{"Ac", 0, 0},
	{"Th", 232.04, 232.0380558},
	{"Pa", 231.04, 231.0358842},
	{"U", 238.03, 238.0507884},
	{"Np", 0, 0},
	{"Pu", 0, 0},
	{"Am", 0, 0},
	{"Cm", 0, 0},
	{"Bk", 0, 0},
	{"Cf", 0, 0},
	{"Es", 0, 0},
	{"Fm", 0, 0},
	{"Md", 0, 0},
	{"No", 0, 0},
	{"Lr", 0, 0},
	{"Rf", 0, 0},
	{"Db", 0, 0},
	{"Sg", 0, 0},
	{"Bh", 0, 0},
	{"Hs", 0, 0},
	{"Mt", 0, 0},
	{"Ds", 0, 0},
	{"Rg", 0, 0},
	{"Cn", 0, 0},
	{"Nh", 0, 0},
	{"Fl", 0, 0},
	{"Mc", 0, 0},
	{"Lv", 0, 0},
	{"Ts", 0, 0},
	{"Og", 0, 0},
}

// electronMassDa is the mass of the electron (CODATA 2018).
const electronMassDa = 0.000548579909065

var numberOf = func() map[string]Element {
	t := make(map[string]Element, 118)
	for e := 1; e < len(elements); e++ {
		t[elements[e].symbol] = Element(e)
	}
	return t
}()

// Symbol returns the symbol of e, "*" for the unknown atom.
func (e Element) Symbol() string {
	if int(e) >= len(elements) {
		return "?"
	}
	return elements[e].symbol
}

// ElementBySymbol returns the element with the symbol s, written as usual ("Cl").
func ElementBySymbol(s string) (Element, bool) {
	e, ok := numberOf[s]
	return e, ok
}

// IsHalogen says whether e is fluorine, chlorine, bromine or iodine.
func (e Element) IsHalogen() bool { return e == 9 || e == 17 || e == 35 || e == 53 }

// IsMetal says whether e counts as a metal in a salt or organometallic compound: everything but
// hydrogen, the noble gases, halogens and B C N O Si P S Ge As Se Te.
func (e Element) IsMetal() bool {
	switch e {
	case 0, 1, 2, 5, 6, 7, 8, 9, 10, 14, 15, 16, 17, 18, 32, 33, 34, 35, 36, 52, 53, 54, 85, 86, 117, 118:
		return false
	}
	return true
}
