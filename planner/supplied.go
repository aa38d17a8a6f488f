package planner

import (
	"math"
	"sort"

	"shelfward/molecule/smiles"
	"shelfward/planner/route"
	"shelfward/planner/sheet"
	"shelfward/planner/shelf"
	"shelfward/reactions/reagent"
)

// Supplied describes the bottle that a material was taken from: the same one that its mass per mole
// comes from, or the trade's usual form of what is not on the shelf.
func (s *stock) Supplied(mat *route.Material) sheet.Supply {
	if it := s.bottle(mat); it != nil {
		return sheet.Supply{MolarMass: mat.MolarMass, PurityFraction: it.PurityFraction, Strength: it.Strength, DensityGPerML: it.DensityGPerML,
			Gas: it.Reagent != nil && it.Reagent.Form == "gas", Solution: it.PurityFraction == 0 && it.Reagent != nil && it.Reagent.Form == "solution"}
	}
	out := sheet.Supply{MolarMass: mat.MolarMass, DensityGPerML: mat.DensityGPerML}
	if re := s.reagent(mat); re != nil {
		out.Strength, out.Gas, out.Solution = re.Strength, re.Form == "gas", re.Form == "solution"
	}
	return out
}

// bottle finds the shelf item behind a material, nil if it is not on the shelf.
func (s *stock) bottle(mat *route.Material) *shelf.Item {
	if !mat.OnShelf {
		return nil
	}
	var items []*shelf.Item
	if mat.Name != "" {
		items = append(items, s.room.Shelf.FindText(mat.Name)...)
	}
	if m, err := smiles.Read(mat.SMILES); err == nil {
		items = append(items, s.room.Shelf.Find(m)...)
	}
	sort.SliceStable(items, func(i, j int) bool { return cheaper(items[i], items[j]) })
	for _, it := range items {
		if it.Molecule != nil && math.Abs(it.DensityGPerML-mat.DensityGPerML) < 1e-9 && (it.Name == mat.Name || mat.Name == "" || it.Name == "") {
			return it
		}
	}
	if len(items) > 0 {
		return items[0]
	}
	return nil
}

// reagent finds the entry of the list of reagents behind a material, nil if there is none.
func (s *stock) reagent(mat *route.Material) *reagent.Reagent {
	if re, ok := s.room.Reagents.Named(mat.Name); ok {
		return re
	}
	if m, err := smiles.Read(mat.SMILES); err == nil {
		if re, ok := s.room.Reagents.ByMolecule(m); ok {
			return re
		}
	}
	return nil
}
