package sheet

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"shelfward/planner/route"
	"shelfward/reactions/hazard"
)

// stock sums the charges over the steps and compares with the shelf.
func (w *writer) stock() {
	index := map[string]int{}
	for i, s := range w.out.Steps {
		sure := w.sureFactor(i)
		for _, c := range s.Charges {
			if c.FromStep > 0 {
				continue
			}
			key := c.Name + "\t" + c.Form
			k, ok := index[key]
			if !ok {
				k = len(w.out.Stock)
				index[key] = k
				w.out.Stock = append(w.out.Stock, newStockLine(&c))
			}
			w.out.Stock[k].add(&c, sure, s.Number)
		}
	}
	for i := range w.out.Stock {
		w.compare(&w.out.Stock[i])
	}
}

func newStockLine(c *Charge) StockLine {
	line := StockLine{Name: c.Name, CAS: c.CAS, Form: c.Form, HaveG: math.NaN(), HaveML: math.NaN(), ByVolume: c.byVolume(), Start: c.Role == roleReactant, Water: isWater(c), material: c.material}
	if line.Water {
		line.Form = ""
	}
	if c.material == nil {
		return line
	}
	line.OnShelf = c.material.OnShelf
	if stock := c.material.StockMol; !math.IsNaN(stock) && line.OnShelf {
		line.HaveG, line.HaveML = c.supply.Charge(stock)
		if line.HaveG == 0 && !line.ByVolume {
			line.HaveG = stock * c.material.MassPerMol
		}
	}
	return line
}

func (l *StockLine) add(c *Charge, sure float64, step int) {
	l.MassG += c.MassG
	l.VolumeML += c.VolumeML
	l.SureG += c.MassG * sure
	l.SureML += c.VolumeML * sure
	if c.Mmol > 0 {
		l.mol += c.Mmol / 1000
	} else {
		l.mol += c.supply.Mol(c.MassG)
	}
	if !slices.Contains(l.Steps, step) {
		l.Steps = append(l.Steps, step)
	}
}

// compare finds out whether the shelf suffices, and says so at the head if it does not.
func (w *writer) compare(l *StockLine) {
	needs, have, write := l.MassG, l.HaveG, grams
	if l.ByVolume {
		needs, have, write = l.VolumeML, l.HaveML, millilitres
	}
	if math.IsNaN(have) || needs <= 0 || have >= needs*(1-1e-6) {
		return
	}
	l.Short = shortly(needs-have, l.ByVolume)
	text := fmt.Sprintf("%s: short by %s: %s of target with what is there (%s%s needed, the shelf has %s)", l.Name, l.Short,
		shortly(w.out.MakeG*have/needs, false), write(needs), formOf(l.Form), write(have))
	text += "; or buy"
	if from := w.makeFrom(l); l.Start && from != "" {
		text += ", or make it from " + from
	}
	w.doubt("%s.", text)
}

// shortly writes an amount with two significant digits.
func shortly(x float64, volume bool) string {
	unit, large := "g", "kg"
	if volume {
		unit, large = "mL", "L"
	}
	switch {
	case x >= 995:
		return fmt.Sprintf("%.1f %s", x/1000, large)
	case x < 0.1:
		return fmt.Sprintf("%.2g m%s", x*1000, unit)
	case x < 9.95:
		return fmt.Sprintf("%.1f %s", x, unit)
	}
	return fmt.Sprintf("%.0f %s", x, unit)
}

func formOf(form string) string {
	if form == "" {
		return ""
	}
	return " of " + form
}

// makeFrom names shelf materials from which one step makes the material; empty if there are none.
func (w *writer) makeFrom(l *StockLine) string {
	if l.material == nil || l.material.SMILES == "" {
		return ""
	}
	m, err := w.desk.Read(l.material.SMILES)
	if err != nil || m.Formula().Count[6] == 0 {
		return ""
	}
	steps, err := w.desk.Book.Expand(w.ctx, m, nil)
	if err != nil {
		return ""
	}
	best, names := math.Inf(1), ""
	for _, s := range steps {
		if len(s.Objections) > 0 {
			continue
		}
		var list []string
		for _, r := range s.Reactants {
			if mat := w.desk.Materials.Molecule(r.Molecule); mat.OnShelf && mat.Name != l.Name {
				list = append(list, mat.Name)
			}
		}
		if loss := 1 - s.Conditions[0].Yield.Usual; len(list) == len(s.Reactants) && loss < best {
			best, names = loss, strings.Join(list, " and ")
		}
	}
	return names
}

// head collects the label of everything charged, gravest first, what nobody has looked up, and what
// some list watches.
func (w *writer) head() {
	var codes, blind []string
	for _, s := range w.out.Steps {
		for _, c := range s.Charges {
			codes = append(codes, c.Hazards...)
			if !c.Known && c.FromStep == 0 && !isWater(&c) && !slices.Contains(w.out.Unknown, c.Name) {
				w.out.Unknown = append(w.out.Unknown, c.Name)
			}
			if text := c.noAmount(); text != "" && !slices.Contains(blind, c.Name) {
				blind = append(blind, c.Name)
				w.doubt("%s: %s.", c.Name, text)
			}
			for _, f := range w.desk.Hazards.Watched(hazard.Substance{Name: c.Name, Reagent: c.Reagent, Molecule: c.Molecule}) {
				if !slices.Contains(w.out.Watched, f.Text) {
					w.out.Watched = append(w.out.Watched, f.Text)
				}
			}
		}
	}
	w.out.Label = w.desk.Hazards.Label(codes)
	w.out.Gravest = w.statements(codes, 5)
	for _, d := range w.route.Doubts {
		if !told(d, w.route) {
			w.doubt("%s", d)
		}
	}
}

// noAmount says why no amount of a charge could be worked out; empty if one was, or none was asked for.
func (c *Charge) noAmount() string {
	switch {
	case c.Mmol == 0 || c.FromStep > 0 || c.MassG > 0 || c.VolumeML > 0:
		return ""
	case c.material == nil:
		return "not in the lists, so no amount is printed: " + digits(c.Mmol) + " mmol by its data sheet"
	case c.supply.Solution:
		return "no strength is known, so no amount is printed: titrate, then V = n/c for " + digits(c.Mmol) + " mmol"
	}
	return "no molar mass is known, so no amount is printed: " + digits(c.Mmol) + " mmol by its data sheet"
}

// told says whether a doubt of the route is on the sheet already, with its amounts.
func told(doubt string, r *route.Route) bool {
	return slices.ContainsFunc(r.Short, func(s string) bool { return strings.Contains(doubt, s) })
}
