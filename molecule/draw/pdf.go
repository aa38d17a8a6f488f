package draw

import (
	"image/color"
	"io"
	"strings"
	"time"

	"codeberg.org/go-pdf/fpdf"
)

// WritePDF writes the drawing as a PDF of one page of its own size: lines as lines, text as text in Helvetica.
// The same drawing gives the same bytes.
func (d *Drawing) WritePDF(w io.Writer) error {
	pdf := fpdf.NewCustom(&fpdf.InitType{UnitStr: "pt", Size: fpdf.SizeType{Wd: max(1, d.Width), Ht: max(1, d.Height)}})
	pdf.SetCreationDate(time.Unix(0, 0).UTC()) // no clock in what is drawn
	pdf.SetModificationDate(time.Unix(0, 0).UTC())
	pdf.SetCatalogSort(true)
	pdf.SetTitle(d.Title, true)
	pdf.SetSubject(d.Description, true)
	pdf.SetMargins(0, 0, 0)
	pdf.SetAutoPageBreak(false, 0)
	pdf.AddPage()
	if d.Style.Ground != "" {
		fill(pdf, d.Style.Ground, color.White)
		pdf.Rect(0, 0, d.Width, d.Height, "F")
	}
	d.PaintPDF(pdf, Point{}, 1)
	return pdf.Output(w)
}

// PaintPDF paints the drawing onto the current page of a PDF measured in points, its upper left corner at p.
func (d *Drawing) PaintPDF(pdf *fpdf.Fpdf, p Point, scale float64) {
	fill(pdf, d.Style.Ink, color.Black)
	pdf.SetLineCapStyle("round")
	at := func(q Point) (x, y float64) { return p.X + q.X*scale, p.Y + q.Y*scale }
	for _, s := range d.Shapes {
		switch s := s.(type) {
		case Line:
			ax, ay := at(s.A)
			bx, by := at(s.B)
			pdf.SetLineWidth(s.Width * scale)
			pdf.Line(ax, ay, bx, by)
		case Polygon:
			points := make([]fpdf.PointType, len(s.Points))
			for i, q := range s.Points {
				points[i].X, points[i].Y = at(q)
			}
			pdf.Polygon(points, "F")
		case Text:
			weight := ""
			if s.Bold {
				weight = "B"
			}
			for _, r := range s.Runs {
				pdf.SetFont("Helvetica", weight, r.Size*scale)
				x, y := at(r.At)
				pdf.Text(x, y, winAnsi(r.Text))
			}
		}
	}
}

// fill sets the colour of lines, areas and text.
func fill(pdf *fpdf.Fpdf, text string, usual color.Color) {
	r, g, b, _ := colour(text, usual).RGBA()
	for _, set := range []func(r, g, b int){pdf.SetDrawColor, pdf.SetFillColor, pdf.SetTextColor} {
		set(int(r>>8), int(g>>8), int(b>>8))
	}
}

// winAnsi writes text in the code page of the standard fonts (ISO 8859-1 with some additions); a minus sign
// becomes the dash of the same width, what the page lacks a question mark.
func winAnsi(text string) string {
	var sb strings.Builder
	for _, r := range text {
		switch {
		case r == '\u2212' || r == '\u2013':
			sb.WriteByte(0x96)
		case r == '\u2192':
			sb.WriteString("->")
		case r == '\u2022':
			sb.WriteByte(0x95)
		case r < 0x80 || r >= 0xa0 && r <= 0xff:
			sb.WriteByte(byte(r))
		default:
			sb.WriteByte('?')
		}
	}
	return sb.String()
}
