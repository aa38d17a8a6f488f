package sheet

import (
	_ "embed"
	"fmt"
	"html/template"
	"io"

	"shelfward/molecule/draw"
)

// HTML prints the sheet as one self-contained page for printing: black on white, a new A4 page per step.
func (s *Sheet) HTML(w io.Writer) error { return page.Execute(w, s) }

//go:embed page.html
var pageText string

var page = template.Must(template.New("sheet").Funcs(template.FuncMap{
	"add": func(a, b int) int { return a + b }, "grams": grams, "digits": digits, "shown": shown, "stockName": func(l StockLine) string { return l.name() }, "steps": joinInts,
	"mass": func(c Charge) string { return massText(&c) }, "volume": func(c Charge) string { return volumeText(&c) }, "charge": func(c Charge) string { return chargeName(&c) },
	"equiv": func(x float64) string { return positive(x, "%.3g") }, "molar": func(x float64) string { return positive(x, "%.2f") }, "workup": func(s Step) string { return workupText(&s) }, "mmol": positiveDigits,
	"stock": stockCells, "overview": func(s *Sheet) []string { return s.overview() }, "have": func(l StockLine) string { return haveText(&l) }, "none": orNone, "pictograms": pictograms,
	"target": targetText, "comesOut": comesOutText, "yield": yieldText, "unknown": unknownText, "expect": func(s Step) string { return expectText(&s) },
	"know": func(s Step) []part { return s.knowParts() }, "count": stepCount, "charges": func(s Step) []Charge { return s.inFlask() },
	"drawing": func(c Compound, widthMM, heightMM float64) template.HTML { return drawing(c, widthMM, heightMM) },
}).Parse(pageText))

// drawing is the structure no larger than a frame; small molecules keep their bond length.
func drawing(c Compound, widthMM, heightMM float64) template.HTML {
	return template.HTML(fmt.Sprintf(`<div class="drawing" style="max-width:%.0fmm;max-height:%.0fmm">%s</div>`, widthMM, heightMM, draw.SVG(c.Molecule, draw.Options{Title: shown(c)})))
}

// stockCells are mass, volume and the amount to be sure.
func stockCells(l StockLine) []string {
	mass, volume, sure := l.needs()
	return []string{mass, volume, sure}
}

// inFlask are the charges of the table; work-up materials are told in one line.
func (st *Step) inFlask() (out []Charge) {
	for _, c := range st.Charges {
		if c.Role != roleWorkup {
			out = append(out, c)
		}
	}
	return out
}
