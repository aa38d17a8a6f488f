package draw

import (
	"fmt"
	"html"
	"strings"

	"shelfward/molecule"
)

// SVG draws m as a self-contained SVG element.
func SVG(m *molecule.Molecule, o Options) string { return Structure(m, o).SVG() }

// SVG writes the drawing as a self-contained SVG element: text as text, title and description for screen readers.
func (d *Drawing) SVG() string {
	var b strings.Builder
	fmt.Fprintf(&b, `<svg xmlns="http://www.w3.org/2000/svg" role="img" width="%.0f" height="%.0f" viewBox="0 0 %.0f %.0f" font-family="Helvetica, Arial, sans-serif" fill="%s" stroke-linecap="round"><title>%s</title><desc>%s</desc>`,
		d.Width, d.Height, d.Width, d.Height, d.Style.Ink, html.EscapeString(d.Title), html.EscapeString(d.Description))
	if d.Style.Ground != "" {
		fmt.Fprintf(&b, `<rect width="100%%" height="100%%" fill="%s"/>`, d.Style.Ground)
	}
	for _, s := range d.Shapes {
		switch s := s.(type) {
		case Line:
			fmt.Fprintf(&b, `<line x1="%.1f" y1="%.1f" x2="%.1f" y2="%.1f" stroke="%s" stroke-width="%.1f"/>`, s.A.X, s.A.Y, s.B.X, s.B.Y, d.Style.Ink, s.Width)
		case Polygon:
			b.WriteString(`<polygon points="`)
			for i, p := range s.Points {
				if i > 0 {
					b.WriteByte(' ')
				}
				fmt.Fprintf(&b, "%.1f,%.1f", p.X, p.Y)
			}
			b.WriteString(`"/>`)
		case Text:
			s.svg(&b)
		}
	}
	b.WriteString("</svg>")
	return b.String()
}

func (s Text) svg(b *strings.Builder) {
	weight := ""
	if s.Bold {
		weight = ` font-weight="bold"`
	}
	if len(s.Runs) == 1 {
		r := s.Runs[0]
		fmt.Fprintf(b, `<text x="%.1f" y="%.1f" font-size="%g"%s>%s</text>`, r.At.X, r.At.Y, r.Size, weight, html.EscapeString(r.Text))
		return
	}
	fmt.Fprintf(b, `<text%s>`, weight)
	for _, r := range s.Runs {
		fmt.Fprintf(b, `<tspan x="%.1f" y="%.1f" font-size="%g">%s</tspan>`, r.At.X, r.At.Y, r.Size, html.EscapeString(r.Text))
	}
	b.WriteString("</text>")
}
