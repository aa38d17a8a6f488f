package sheet

import (
	"fmt"
	"slices"
	"strings"

	"shelfward/reactions"
	"shelfward/reactions/hazard"
)

// spentEquiv is the amount below which an initiator counts as used up before the work-up.
const spentEquiv = 0.02

// spent says whether so little was charged that nothing of it is left at the end.
func (c *Charge) spent() bool { return c.Equiv > 0 && c.Equiv < spentEquiv }

// Volumes of solvent in mL per g of the first reactant outside which a note is printed (common practice).
const littleMLPerG, muchMLPerG = 3, 30

// mixture tells what the flask as a whole does: intended pairs, cautions of the rules and the reagents,
// concentration.
func (w *writer) mixture(s *Step, set *reactions.Conditions, full float64) {
	flask := append(substances(s.Charges, roleReactant, roleReagent, roleCatalyst, roleSolvent), hazard.Substance{Name: shown(s.Product), Molecule: s.Product.Molecule})
	clashes := w.desk.Hazards.Clashes(flask, w.desk.Book.Groups())
	if text := pairs(clashes); text != "" {
		s.Mixture = append(s.Mixture, fmt.Sprintf("Meet on purpose; the order, the rate of addition and %s are the control: %s.", temperatureText(set.Temperature), text))
	}
	if text := pairs(w.workupPairs(s)); text != "" {
		s.Mixture = append(s.Mixture, "Meet on purpose in the work-up; cold, in small portions, open to the hood: "+text+".")
	}
	for _, t := range set.Cautions {
		if !strings.Contains(t, "crude") { // told under what the crude may show
			s.Mixture = append(s.Mixture, t)
		}
	}
	for _, c := range s.Charges {
		if c.Role != roleWorkup && c.Reagent != nil && c.Reagent.Caution != "" {
			text := capital(c.Name) + ": " + c.Reagent.Caution
			if !slices.Contains(s.Mixture, text) {
				s.Mixture = append(s.Mixture, text)
			}
		}
	}
	concentration(s, full)
}

// capital begins a sentence with a name; a prefix such as n- or o- stays small, N- would mean nitrogen.
func capital(s string) string {
	if len(s) < 2 || s[0] < 'a' || s[0] > 'z' || s[1] == '-' {
		return s
	}
	return strings.ToUpper(s[:1]) + s[1:]
}

// mostPairs bounds how many pairs are told in full.
const mostPairs = 4

// pairs writes clashes on one line, the gravest first.
func pairs(clashes []hazard.Clash) string {
	var told []string
	for i, c := range clashes {
		if i == mostPairs {
			told = append(told, fmt.Sprintf("%d milder pairs", len(clashes)-mostPairs))
			break
		}
		told = append(told, c.Says())
	}
	return strings.Join(told, "; ")
}

// workupPairs are the pairs between what is still there at the end and the work-up materials.
func (w *writer) workupPairs(s *Step) (out []hazard.Clash) {
	var left []Charge
	for _, c := range s.Charges {
		if !c.spent() {
			left = append(left, c)
		}
	}
	work := substances(left, roleWorkup)
	isWork := func(name string) bool {
		return slices.ContainsFunc(work, func(x hazard.Substance) bool { return x.Name == name })
	}
	all := append(substances(left, roleReactant, roleReagent, roleCatalyst, roleSolvent), work...)
	seen := map[string]bool{}
	for _, c := range w.desk.Hazards.Clashes(all, w.desk.Book.Groups()) {
		if isWork(c.A) != isWork(c.B) && !seen[c.Says()] {
			seen[c.Says()] = true
			out = append(out, c)
		}
	}
	return out
}

// grave results make an unintended meeting a stop flag; heat alone does not.
var grave = []string{"explosion", "toxic gas", "fire", "flammable gas"}

// apart finds what must not meet outside the flask, at the sink and in the waste bottle: a step's own
// materials against the rinses and against the materials of the other steps.
func (w *writer) apart() {
	for i := range w.out.Steps {
		s := &w.out.Steps[i]
		var own []Charge
		for _, c := range s.Charges {
			if c.FromStep == 0 && c.Role != roleWorkup && c.Role != roleSolvent && c.Equiv >= spentEquiv {
				own = append(own, c)
			}
		}
		strangers, where := w.strangers(i)
		for _, c := range own {
			w.keepApart(s, &c, strangers, where)
		}
	}
}

// strangers are the rinses and the materials of the other steps that step i does not use itself; where
// says for each what brings it.
func (w *writer) strangers(i int) (list []hazard.Substance, where map[string]string) {
	where = map[string]string{}
	for _, c := range w.out.Steps[i].Charges {
		where[c.Name] = ""
	}
	add := func(x hazard.Substance, from string) {
		if _, met := where[x.Name]; !met {
			where[x.Name] = from
			list = append(list, x)
		}
	}
	for _, r := range w.desk.Guide.Rinses {
		re, _ := w.desk.Reagents.Named(r.Name.Value)
		add(hazard.Substance{Name: r.Name.Value, Reagent: re}, r.Use)
	}
	for k := range w.out.Steps {
		if k == i {
			continue
		}
		for _, c := range w.out.Steps[k].Charges {
			if c.FromStep == 0 && !isWater(&c) && (c.Role == roleWorkup || c.Role == roleReagent || c.Role == roleCatalyst) {
				add(hazard.Substance{Name: c.Name, Reagent: c.Reagent, Molecule: c.Molecule}, fmt.Sprintf("step %d", w.out.Steps[k].Number))
			}
		}
	}
	return list, where
}

// keepApart writes one stop flag for a charge and the strangers it must not meet.
func (w *writer) keepApart(s *Step, c *Charge, strangers []hazard.Substance, where map[string]string) {
	own := hazard.Substance{Name: c.Name, Reagent: c.Reagent, Molecule: c.Molecule}
	var told []string
	for _, x := range w.desk.Hazards.Clashes(append([]hazard.Substance{own}, strangers...), w.desk.Book.Groups()) {
		if x.A != c.Name && x.B != c.Name || !slices.ContainsFunc(x.Gives, func(g string) bool { return slices.Contains(grave, g) }) {
			continue
		}
		other := x.A
		if other == c.Name {
			other = x.B
		}
		told = append(told, fmt.Sprintf("%s (%s: %s)", other, where[other], strings.Join(x.Gives, ", ")))
	}
	if len(told) > 0 {
		s.stop("keep %s, its rinses and its waste away from %s", c.Name, strings.Join(told, ", "))
	}
}

// concentration notes a mixture that is very thick or very thin.
func concentration(s *Step, full float64) {
	volumeML, firstG := 0.0, s.From[0].MolarMass*s.Charges[0].Mmol/1000
	for _, c := range s.Charges {
		if c.Role == roleSolvent {
			volumeML += c.VolumeML
		}
	}
	if volumeML == 0 || firstG == 0 {
		return
	}
	perG := volumeML / firstG
	text := fmt.Sprintf("Concentration: %s mL of solvent per g of %s, product about %s mol/L at full yield", digits(perG), shown(s.From[0]), digits(full*1000/volumeML))
	switch {
	case perG < littleMLPerG:
		text += "; thick: watch heat and stirring"
	case perG > muchMLPerG:
		text += "; thin: much waste"
	}
	s.Mixture = append(s.Mixture, text+".")
}

// waste sorts the charges into streams; volumes are those charged, washings come on top.
func (w *writer) waste(charges []Charge) (out []string) {
	names := make([][]string, len(w.desk.Guide.Waste))
	volumes := make([]float64, len(w.desk.Guide.Waste))
	for _, c := range charges {
		for k := range w.desk.Guide.Waste {
			stream := &w.desk.Guide.Waste[k]
			if c.spent() || !does(&c, stream.Acts) || stream.Solvent && c.Role != roleSolvent && c.Role != roleWorkup {
				continue
			}
			if !slices.Contains(names[k], c.Name) {
				names[k] = append(names[k], c.Name)
			}
			volumes[k] += c.VolumeML
			break
		}
	}
	for k, stream := range w.desk.Guide.Waste {
		if len(names[k]) == 0 {
			continue
		}
		text := stream.Stream + ": " + strings.Join(names[k], ", ")
		if stream.Volume && volumes[k] > 0 {
			text += fmt.Sprintf("; about %s and washings", millilitres(volumes[k]))
		}
		out = append(out, text)
	}
	return append(out, "no common bottle before everything is quenched; what is not named here: ask")
}
