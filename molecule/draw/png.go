package draw

import (
	"fmt"
	"image"
	"image/color"
	imagedraw "image/draw"
	"image/png"
	"io"
	"math"
	"sync"

	"golang.org/x/image/font"
	"golang.org/x/image/font/gofont/goregular"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/math/fixed"
	"golang.org/x/image/vector"
)

// maxPixels bounds a picture; a larger drawing is written at a smaller scale.
const maxPixels = 40_000_000

var pngFont = sync.OnceValues(func() (*opentype.Font, error) { return opentype.Parse(goregular.TTF) })

// WritePNG writes the drawing as a PNG image, scale pixels to a point. The ground is white where the style leaves
// it to the page.
func (d *Drawing) WritePNG(w io.Writer, scale float64) error {
	if pixels := d.Width * d.Height * scale * scale; pixels > maxPixels {
		scale *= math.Sqrt(maxPixels / pixels)
	}
	ink, ground := colour(d.Style.Ink, color.Black), colour(d.Style.Ground, color.White)
	r := &raster{scale: scale, ink: image.NewUniform(ink), faces: map[float64]font.Face{}}
	r.img = image.NewRGBA(image.Rect(0, 0, max(1, int(math.Ceil(d.Width*scale))), max(1, int(math.Ceil(d.Height*scale)))))
	imagedraw.Draw(r.img, r.img.Bounds(), image.NewUniform(ground), image.Point{}, imagedraw.Src)
	for _, s := range d.Shapes {
		switch s := s.(type) {
		case Line:
			r.polygon(outline(s))
		case Polygon:
			r.polygon(s.Points)
		case Text:
			for _, run := range s.Runs {
				if err := r.text(run); err != nil {
					return err
				}
			}
		}
	}
	return png.Encode(w, r.img)
}

// colour reads #rrggbb; anything else is the usual colour.
func colour(text string, usual color.Color) color.Color {
	var r, g, b uint8
	if n, _ := fmt.Sscanf(text, "#%02x%02x%02x", &r, &g, &b); n == 3 {
		return color.RGBA{r, g, b, 255}
	}
	return usual
}

// outline is a line with round ends as an area.
func outline(s Line) []Point {
	half := s.Width / 2
	along := s.B.sub(s.A)
	angle := angleOf(along)
	var out []Point
	const steps = 6
	for i := range steps + 1 {
		out = append(out, s.B.add(toward(angle-math.Pi/2+math.Pi*float64(i)/steps).scale(half)))
	}
	for i := range steps + 1 {
		out = append(out, s.A.add(toward(angle+math.Pi/2+math.Pi*float64(i)/steps).scale(half)))
	}
	return out
}

// raster paints shapes onto an image.
type raster struct {
	img   *image.RGBA
	ink   *image.Uniform
	scale float64
	faces map[float64]font.Face
}

// polygon fills an area; only the part of the image around it is touched.
func (r *raster) polygon(points []Point) {
	lo, hi := Point{math.Inf(1), math.Inf(1)}, Point{math.Inf(-1), math.Inf(-1)}
	for _, p := range points {
		lo = Point{min(lo.X, p.X*r.scale), min(lo.Y, p.Y*r.scale)}
		hi = Point{max(hi.X, p.X*r.scale), max(hi.Y, p.Y*r.scale)}
	}
	area := image.Rect(int(lo.X)-1, int(lo.Y)-1, int(hi.X)+2, int(hi.Y)+2)
	z := vector.NewRasterizer(area.Dx(), area.Dy())
	for i, p := range points {
		x, y := float32(p.X*r.scale)-float32(area.Min.X), float32(p.Y*r.scale)-float32(area.Min.Y)
		if i == 0 {
			z.MoveTo(x, y)
		} else {
			z.LineTo(x, y)
		}
	}
	z.ClosePath()
	z.Draw(r.img, area, r.ink, image.Point{})
}

// text writes a run in the width that it has in the drawing.
func (r *raster) text(run Run) error {
	face, ok := r.faces[run.Size]
	if !ok {
		f, err := pngFont()
		if err == nil {
			face, err = opentype.NewFace(f, &opentype.FaceOptions{Size: run.Size * r.scale, DPI: 72})
		}
		if err != nil {
			return fmt.Errorf("the font of the picture: %w", err)
		}
		r.faces[run.Size] = face
	}
	// The letters of this font keep their proportions; the run as a whole gets the width that the drawing left it.
	natural := float64(font.MeasureString(face, run.Text)) / 64
	stretch := textWidth(run.Text, run.Size) * r.scale / max(natural, 1e-9)
	x := run.At.X * r.scale
	for _, c := range run.Text {
		dot := fixed.Point26_6{X: fixed.Int26_6(64 * x), Y: fixed.Int26_6(64 * run.At.Y * r.scale)}
		(&font.Drawer{Dst: r.img, Src: r.ink, Face: face, Dot: dot}).DrawString(string(c))
		advance, _ := face.GlyphAdvance(c)
		x += float64(advance) / 64 * stretch
	}
	return nil
}
