// Package planner puts the room together for one run: rules, reagents, hazards and the shelf, as the
// packages below it want to see them.
package planner

import (
	"io/fs"
	"math"
	"sort"

	"shelfward/molecule"
	"shelfward/molecule/name"
	"shelfward/molecule/restricted"
	"shelfward/molecule/smiles"
	"shelfward/planner/route"
	"shelfward/planner/sheet"
	"shelfward/planner/shelf"
	"shelfward/reactions"
	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
)

// Room is everything loaded for a run. It is immutable and safe for concurrent use.
type Room struct {
	Book     *reactions.Book
	Reagents *reagent.Table
	Hazards  *hazard.Data
	Shelf    *shelf.Shelf
	Invented bool // some item comes from the built-in example shelf

	Restricted *restricted.Screen

	guide *sheet.Guide
	scale *route.Scale
	stock *stock
}

// Open loads the rules of fsys and the shelf files (none: the built-in example shelf); relative shelf
// paths begin in dir. Errors name file and line.
func Open(fsys fs.FS, shelfFiles []string, dir string) (*Room, error) {
	r := &Room{}
	var err error
	if r.Reagents, err = reagent.Load(fsys); err != nil {
		return nil, err
	}
	if r.Hazards, err = hazard.Load(fsys, r.Reagents); err != nil {
		return nil, err
	}
	if r.Book, err = reactions.Load(fsys); err != nil {
		return nil, err
	}
	known := &shelf.Known{Reagents: r.Reagents, Hazards: r.Hazards, Structure: readName, Name: systematicName}
	if r.Shelf, err = shelf.Load(fsys, shelfFiles, dir, known); err != nil {
		return nil, err
	}
	if r.Restricted, err = restricted.Load(fsys); err != nil {
		return nil, err
	}
	if r.guide, err = sheet.LoadGuide(fsys, r.Reagents); err != nil {
		return nil, err
	}
	if r.scale, err = route.LoadScale(fsys); err != nil {
		return nil, err
	}
	r.Invented = len(shelfFiles) == 0
	for _, f := range shelfFiles {
		r.Invented = r.Invented || f == shelf.BuiltinName
	}
	r.stock = &stock{room: r}
	return r, nil
}

// World is the room as route planning sees it.
func (r *Room) World() *route.World {
	return &route.World{Book: r.Book, Transforms: r.Book.Transforms, Materials: r.stock, Shelf: r.Shelf.Sample(), ShelfItems: r.Shelf.Structures(),
		Gravity: r.Hazards.Gravity, Scale: r.scale, Name: r.Name, Declined: r.declined, Write: smiles.Write, WriteClasses: writeClasses, Read: smiles.Read}
}

// writeClasses writes canonical SMILES with the atom classes.
func writeClasses(m *molecule.Molecule) string { return smiles.WriteInOrder(m, m.Ranks()) }

// declined says whether a route may not pass through m. What stands on the shelf is a reagent charged,
// not an intermediate isolated.
func (r *Room) declined(m *molecule.Molecule) bool {
	return !r.Shelf.Has(m) && r.Restricted.Intermediate(m).Declined()
}

// Desk is the room as the route sheet sees it.
func (r *Room) Desk() *sheet.Desk {
	return &sheet.Desk{Book: r.Book, Materials: r.stock, Supplied: r.stock.Supplied, Reagents: r.Reagents, Hazards: r.Hazards, Guide: r.guide,
		Name: r.Name, Read: smiles.Read}
}

// readName reads a systematic name.
func readName(text string) (*molecule.Molecule, bool) {
	m, err := name.Read(text)
	return m, err == nil
}

// systematicName writes the name of m with its stereodescriptors; a name that would leave out a mark says
// less than the structure and is not given.
func systematicName(m *molecule.Molecule) string {
	if text, complete := name.OfWithStereo(m); complete {
		return text
	}
	return ""
}

// Name returns a name of m from the shelf or the list of reagents, or its systematic name; "" if none is
// known.
func (r *Room) Name(m *molecule.Molecule) string {
	for _, it := range r.Shelf.Find(m) {
		if it.Name != "" && it.Molecule.Key() == m.Key() {
			return it.Name
		}
	}
	if re, ok := r.Reagents.ByExact(m); ok {
		return re.Name
	}
	return systematicName(m)
}

// stock answers route.Materials from the shelf first, then from the list of reagents.
type stock struct{ room *Room }

// Molecule describes a molecule that a step consumes.
func (s *stock) Molecule(m *molecule.Molecule) route.Material {
	if items := s.room.Shelf.Find(m); len(items) > 0 {
		return s.fromItems(items)
	}
	mat := route.Computed(m, smiles.Write(m))
	if re, ok := s.room.Reagents.ByMolecule(m); ok {
		s.addReagent(&mat, re)
	}
	return mat
}

// OtherMarks finds a structure on the shelf that is m but for stereo marks.
func (s *stock) OtherMarks(m *molecule.Molecule) *molecule.Molecule {
	return s.room.Shelf.OtherMarks(m)
}

// CarbonPrice asks the whole shelf.
func (s *stock) CarbonPrice() (float64, bool, int) { return s.room.Shelf.CarbonPrice() }

// Named describes a reagent or solvent by the name that conditions use.
func (s *stock) Named(name string) (route.Material, bool) {
	if items := s.room.Shelf.FindText(name); len(items) > 0 && items[0].Molecule != nil {
		return s.fromItems(items), true
	}
	re, ok := s.room.Reagents.Named(name)
	if !ok {
		return route.Material{}, false
	}
	m, err := re.Molecule()
	if err != nil || m == nil {
		mat := route.Material{PricePerMol: math.NaN(), StockMol: math.NaN()}
		s.addReagent(&mat, re)
		return mat, true
	}
	if items := s.room.Shelf.Find(m); len(items) > 0 && items[0].Reagent == re {
		return s.fromItems(items), true
	}
	mat := route.Computed(m, smiles.Write(m))
	s.addReagent(&mat, re)
	return mat, true
}

// addReagent fills what the list of reagents knows of a substance that is not on the shelf.
func (s *stock) addReagent(mat *route.Material, re *reagent.Reagent) {
	mat.Name, mat.CAS, mat.Hazards, mat.HazardsKnown = re.Name, re.CAS, re.Hazards, re.HazardsKnown
	mat.DensityGPerML = re.DensityGPerML
	s.strength(mat, re.Strength, 0)
}

// strength turns a supplied strength into the mass that holds one mol, and the water in it.
func (s *stock) strength(mat *route.Material, st reagent.Strength, purity float64) {
	switch {
	case st.MassFraction > 0:
		mat.MassPerMol = mat.MolarMass / st.MassFraction
	case st.MolarM > 0 && mat.DensityGPerML > 0:
		mat.MassPerMol = 1000 / st.MolarM * mat.DensityGPerML
	case st.MolarM > 0:
		mat.MassPerMol = 1000 / st.MolarM // about 1 g/mL where the density is not known
	case purity > 0:
		mat.MassPerMol = mat.MolarMass / purity
		return
	default:
		return
	}
	if st.In == "" || st.In == "water" {
		mat.WaterPerMol = max(0, mat.MassPerMol-mat.MolarMass)
	}
}

// fromItems describes the bottle that comes first: with a known price before one without, then cheaper.
// Stock is summed over all bottles of the substance.
func (s *stock) fromItems(items []*shelf.Item) route.Material {
	best := append([]*shelf.Item(nil), items...)
	sort.SliceStable(best, func(i, j int) bool { return cheaper(best[i], best[j]) })
	it := best[0]
	mat := route.Material{Name: it.Name, CAS: it.CAS, SMILES: smiles.Write(it.Molecule), OnShelf: true, MolarMass: it.MolarMass(),
		DensityGPerML: it.DensityGPerML, PricePerMol: it.PricePerMol(), Currency: it.Currency, Hazards: it.Hazards, HazardsKnown: it.HazardsKnown}
	mat.MassPerMol = mat.MolarMass
	s.strength(&mat, it.Strength, it.PurityFraction)
	mat.StockMol = 0
	for _, x := range items {
		mat.StockMol += x.StockMol() // one unknown amount makes the sum unknown
	}
	if mat.Name == "" {
		mat.Name = s.room.Name(it.Molecule)
	}
	return mat
}

func cheaper(a, b *shelf.Item) bool {
	pa, pb := a.PricePerMol(), b.PricePerMol()
	switch {
	case math.IsNaN(pa):
		return false
	case math.IsNaN(pb):
		return true
	}
	return pa < pb
}
