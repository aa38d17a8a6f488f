package spectra

import (
	"io/fs"
	"strings"

	"shelfward/rules"
)

// feature is a group environment that shows in the infrared.
type feature uint8

const (
	alcoholOH feature = iota
	phenolOH
	acidOH
	amineNH2
	amineNH
	amideNH2
	amideNH
	azoleNH
	thiolSH
	alkyneCH
	innerAlkyne
	nitrile
	isocyanate
	isothiocyanate
	azide
	isocyanide
	cumuleneBand
	aldehydeCH
	nitro
	sulfone
	sulfoxide
	imine
	thiocarbonyl
	vinylBand
	vinylidene
	alkene
	conjAlkene
	enolEther
	alkeneCH
	areneBand
	heteroarene
	monoBenzene
	orthoBenzene
	metaBenzene
	paraBenzene
	ether
	arylEther
	esterCO
	acetateCO
	ketoneCC
	amideCN
	arylAmineCN
	amineCN
	bandCF
	bandCCl
	bandCBr
	oxirane
	alkylBand
	ringSkeleton
	phosphoryl
	carbonylBand // from the table of carbonyls
	numFeatures
)

var featureNames = [numFeatures]string{
	"alcohol OH", "phenol OH", "acid OH", "amine NH2", "amine NH", "amide NH2", "amide NH", "azole NH", "thiol SH", "alkyne CH",
	"inner alkyne", "nitrile", "isocyanate", "isothiocyanate", "azide", "isocyanide", "cumulene", "aldehyde CH", "nitro", "sulfone",
	"sulfoxide", "imine", "thiocarbonyl", "vinyl", "vinylidene", "alkene", "conjugated alkene", "enol ether", "alkene CH", "arene",
	"heteroarene", "monosubstituted benzene", "ortho-disubstituted benzene", "meta-disubstituted benzene", "para-disubstituted benzene",
	"ether", "aryl ether", "ester C-O", "acetate C-O", "ketone C-C", "amide C-N", "aryl amine C-N", "amine C-N", "C-F", "C-Cl", "C-Br",
	"oxirane", "alkyl", "ring skeleton", "phosphoryl", "C=O",
}

// Strength of a band as usually seen or as listed.
type Strength uint8

const (
	AnyStrength Strength = iota
	Absent
	Weak
	Medium
	Strong
)

var strengthNames = [...]string{"", "none", "weak", "medium", "strong"}

// String returns the word of the case file.
func (s Strength) String() string { return strengthNames[s] }

// StrengthByName reads none, weak, medium or strong.
func StrengthByName(name string) (Strength, bool) {
	for i, n := range strengthNames {
		if n == name && i > 0 {
			return Strength(i), true
		}
	}
	return AnyStrength, false
}

// Band is a predicted band: anywhere in LowCM1-HighCM1, or for C=O around MeanCM1 with WidthCM1.
type Band struct {
	feature         feature
	Carbonyl        Carbonyl // class for a C=O band
	LowCM1, HighCM1 float32
	MeanCM1         float32 // 0 where only the range counts
	WidthCM1        float32
	Strength        Strength
	Missed          float32 // drop in log-likelihood if no such band is listed
}

// Name says what vibrates, in words.
func (b Band) Name() string {
	if b.feature == carbonylBand {
		return "C=O, " + b.Carbonyl.String()
	}
	return featureNames[b.feature]
}

// IsCarbonyl reports a C=O band.
func (b Band) IsCarbonyl() bool { return b.feature == carbonylBand }

type bandFile struct {
	Sources map[string]string `yaml:"sources"`
	Bands   []struct {
		sourced  `yaml:",inline"`
		Feature  rules.Text `yaml:"feature" need:"feature: nitrile"`
		At       []float64  `yaml:"at"`
		Strength rules.Text `yaml:"strength" need:"strength: strong"`
		Missed   float64    `yaml:"missed"`
	} `yaml:"bands"`
}

func (t *tables) readBands(fsys fs.FS) error {
	const name = "bands.yaml"
	var f bandFile
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return err
	}
	path := rules.PathOf(fsys, name)
	for _, r := range f.Bands {
		which := -1
		for i, n := range featureNames {
			if n == r.Feature.Value {
				which = i
			}
		}
		if which < 0 {
			return r.Feature.Errorf(path, "unknown feature %q; known: %s", r.Feature.Value, strings.Join(featureNames[:], "; "))
		}
		s, ok := StrengthByName(r.Strength.Value)
		if !ok || len(r.At) != 2 || r.At[0] >= r.At[1] {
			return r.Errorf("expected at: [low, high] and strength: strong, medium or weak")
		}
		if err := sourceCheck(f.Sources, r.sourced); err != nil {
			return err
		}
		t.bands[which] = append(t.bands[which], Band{feature: feature(which), LowCM1: float32(r.At[0]), HighCM1: float32(r.At[1]), Strength: s, Missed: float32(r.Missed)})
	}
	return nil
}

// bands lists what the molecule should show, each feature once.
func (p *Predictor) bands(out []Band) []Band {
	var has [numFeatures]bool
	for a := range p.n {
		p.atomFeatures(a, &has)
		if c := p.carbonyl[a]; c != noCarbonyl {
			out = p.addCarbonylBand(a, c, out)
		}
	}
	p.benzeneFeatures(&has)
	for f := range has {
		if has[f] {
			out = append(out, p.t.bands[f]...)
		}
	}
	return out
}

func (p *Predictor) addCarbonylBand(a int, c Carbonyl, out []Band) []Band {
	row := &p.t.carbonyl[c]
	mean := row.bandCM1
	switch p.chelated(a) {
	case oxygen:
		mean += p.t.chelateOH.band
	case nitrogen:
		mean += p.t.chelateNH.band
	}
	switch size := p.ring[a]; {
	case c >= arLactone:
	case size == 4:
		mean += p.t.ringBand[0]
	case size == 5 && (c == secAmide || c == tertAmide || c == arAmide || c == arTertAmide || c == enAmide):
		mean += p.t.ringBand[3]
	case size == 5 && c != imide && c != anhydride:
		mean += p.t.ringBand[1]
	}
	for i := range out {
		if out[i].feature == carbonylBand && out[i].MeanCM1 == mean {
			return out
		}
	}
	add := func(mean, width, missed float32) {
		out = append(out, Band{feature: carbonylBand, Carbonyl: c, LowCM1: mean - 2*width, HighCM1: mean + 2*width, MeanCM1: mean, WidthCM1: width, Strength: Strong, Missed: missed})
	}
	add(mean, row.width, 4)
	// two coupled C=O: the second band of anhydrides lies some 65 lower, that of cyclic imides 60 higher
	switch {
	case c == anhydride:
		add(mean-62, row.width, 1.5)
	case c == imide && p.ring[a] == 5:
		add(mean+60, row.width, 0.3)
	}
	return out
}

// atomFeatures marks the features that begin at atom a.
func (p *Predictor) atomFeatures(a int, has *[numFeatures]bool) {
	switch p.el[a] {
	case carbon:
		p.carbonFeatures(a, has)
	case oxygen:
		p.oxygenFeatures(a, has)
	case nitrogen:
		p.nitrogenFeatures(a, has)
	case sulfur:
		oxo := 0
		for _, nb := range p.nb[a] {
			if p.order[nb.Bond] == 2 && p.el[nb.Atom] == oxygen {
				oxo++
			}
		}
		has[sulfone] = has[sulfone] || oxo >= 2
		has[sulfoxide] = has[sulfoxide] || oxo == 1
		has[thiolSH] = has[thiolSH] || p.hyd[a] > 0
	case fluorine:
		has[bandCF] = true
	case chlorine:
		has[bandCCl] = true
	case bromine:
		has[bandCBr] = true
	case phosphor:
		has[phosphoryl] = has[phosphoryl] || p.doubleTo(a, oxygen) >= 0
	}
}

func (p *Predictor) carbonFeatures(a int, has *[numFeatures]bool) {
	switch p.sp[a] {
	case single:
		if p.hyd[a] > 0 {
			has[alkylBand] = true
		}
		if p.ring[a] > 0 {
			has[ringSkeleton] = true
		}
	case arene:
		has[areneBand] = true
	case triple:
		p.tripleFeatures(a, has)
	case cumulene:
		switch {
		case p.doubleTo(a, nitrogen) >= 0 && p.doubleTo(a, oxygen) >= 0:
			has[isocyanate] = true
		case p.doubleTo(a, nitrogen) >= 0 && p.doubleTo(a, sulfur) >= 0:
			has[isothiocyanate] = true
		default:
			has[cumuleneBand] = true
		}
	case double:
		p.doubleFeatures(a, has)
	}
}

func (p *Predictor) tripleFeatures(a int, has *[numFeatures]bool) {
	for _, nb := range p.nb[a] {
		if p.order[nb.Bond] != 3 {
			continue
		}
		switch b := int(nb.Atom); {
		case p.el[b] == nitrogen && p.deg[b] == 1:
			has[nitrile] = true
		case p.el[b] == nitrogen:
			has[isocyanide] = true
		case p.hyd[a] > 0:
			has[alkyneCH] = true
		case p.deg[a] == 2 && p.deg[b] == 2:
			has[innerAlkyne] = true
		}
	}
}

func (p *Predictor) doubleFeatures(a int, has *[numFeatures]bool) {
	switch c := p.carbonyl[a]; {
	case c == satAldehyde || c == arAldehyde || c == enal:
		has[aldehydeCH] = true
	case c == satKetone || c == arylKetone || c == diarylKetone || c == enone:
		has[ketoneCC] = true
	case c >= formate && c <= arArylEster || c == carbonate || c == carbamate:
		has[esterCO] = true
		if c == satEster && p.isAcetyl(a) {
			has[acetateCO] = true
		}
	case c == primAmide || c == secAmide || c == tertAmide || c == arAmide || c == arTertAmide || c == enAmide:
		has[amideCN] = true
	}
	if p.carbonyl[a] != noCarbonyl {
		return
	}
	if p.doubleTo(a, nitrogen) >= 0 {
		has[imine] = true
		return
	}
	if p.doubleTo(a, sulfur) >= 0 {
		has[thiocarbonyl] = true
		return
	}
	b := p.doubleTo(a, carbon)
	if b < 0 || p.sp[b] == cumulene {
		return
	}
	conj := p.sp2Neighbour(a, b) || p.sp2Neighbour(b, a)
	if p.hyd[a] > 0 {
		has[alkeneCH] = true
	}
	for _, nb := range p.nb[a] {
		if p.el[nb.Atom] == oxygen || p.el[nb.Atom] == nitrogen {
			has[enolEther] = true
			return
		}
	}
	switch {
	case conj:
		has[conjAlkene] = true
	case p.hyd[a] == 2 && p.hyd[b] == 1:
		has[vinylBand] = true
	case p.hyd[a] == 2 && p.hyd[b] == 0:
		has[vinylidene] = true
	case p.hyd[a] < 2 && p.hyd[b] < 2:
		has[alkene] = true
	}
}

func (p *Predictor) isAcetyl(a int) bool {
	for _, nb := range p.nb[a] {
		if p.el[nb.Atom] == carbon && p.hyd[nb.Atom] == 3 {
			return true
		}
	}
	return false
}

func (p *Predictor) sp2Neighbour(a, not int) bool {
	for _, nb := range p.nb[a] {
		if x := int(nb.Atom); x != not && p.el[x] == carbon && p.sp[x] != single {
			return true
		}
	}
	return false
}

func (p *Predictor) oxygenFeatures(a int, has *[numFeatures]bool) {
	if p.aromatic[a] || p.charge[a] != 0 {
		return
	}
	if p.hyd[a] > 0 && p.deg[a] == 1 {
		x := int(p.nb[a][0].Atom)
		switch {
		case p.carbonyl[x] != noCarbonyl:
			has[acidOH] = true
		case p.sp[x] == arene:
			has[phenolOH] = true
		default:
			has[alcoholOH] = true
		}
		return
	}
	if p.deg[a] != 2 {
		return
	}
	acyl, sp2 := 0, 0
	for _, nb := range p.nb[a] {
		switch x := int(nb.Atom); {
		case p.carbonyl[x] != noCarbonyl:
			acyl++
		case p.sp[x] == arene:
			sp2++
		}
	}
	switch {
	case p.ring[a] == 3:
		has[oxirane] = true
	case acyl > 0:
		has[esterCO] = true
	case sp2 > 0:
		has[arylEther] = true
	default:
		has[ether] = true
	}
}

func (p *Predictor) nitrogenFeatures(a int, has *[numFeatures]bool) {
	if p.aromatic[a] {
		has[heteroarene] = true
		has[azoleNH] = has[azoleNH] || p.hyd[a] > 0
		return
	}
	acyl, aryl, oxygens, doubleN := false, false, 0, false
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		acyl = acyl || p.carbonyl[x] != noCarbonyl || p.el[x] == sulfur
		aryl = aryl || p.el[x] == carbon && p.sp[x] == arene
		if p.el[x] == oxygen && p.deg[x] == 1 && p.hyd[x] == 0 {
			oxygens++
		}
		doubleN = doubleN || p.order[nb.Bond] >= 2 && p.el[x] == nitrogen
	}
	switch {
	case oxygens >= 2:
		has[nitro] = true
	case doubleN && p.sp[a] == cumulene:
		has[azide] = true
	case acyl && p.hyd[a] >= 2:
		has[amideNH2] = true
	case acyl && p.hyd[a] == 1:
		has[amideNH] = true
	case p.hyd[a] >= 2:
		has[amineNH2] = true
	case p.hyd[a] == 1:
		has[amineNH] = true
	}
	if !acyl && oxygens == 0 && p.sp[a] == single {
		has[arylAmineCN] = has[arylAmineCN] || aryl
		has[amineCN] = has[amineCN] || !aryl
	}
}

// benzeneFeatures reads the substitution pattern of simple benzene rings.
func (p *Predictor) benzeneFeatures(has *[numFeatures]bool) {
	for _, r := range p.ringOf {
		if len(r) != 6 {
			continue
		}
		var places []int
		plain := true
		for i, x := range r {
			plain = plain && p.aromatic[x] && p.el[x] == carbon && p.ringDegree(int(x)) == 2
			if p.hyd[x] == 0 {
				places = append(places, i)
			}
		}
		if !plain {
			continue
		}
		switch len(places) {
		case 1:
			has[monoBenzene] = true
		case 2:
			d := places[1] - places[0]
			switch min(d, 6-d) {
			case 1:
				has[orthoBenzene] = true
			case 2:
				has[metaBenzene] = true
			case 3:
				has[paraBenzene] = true
			}
		}
	}
}
