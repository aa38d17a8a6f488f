package draw

// Style is how a drawing looks; lengths are in points of the drawing. Nothing depends on colour alone.
type Style struct {
	Name   string
	Bond   float64 // length of a bond
	Line   float64 // width of a line
	Heavy  float64 // width of a heavy line
	Gap    float64 // between the lines of a double bond
	Wide   float64 // width of the wide end of a wedge
	Font   float64 // size of labels
	Small  float64 // size of what stands above and below the line
	Words  float64 // size of text around an arrow
	Margin float64
	Ink    string // colour of lines and text; currentColor takes that of the page around
	Ground string // colour behind; empty leaves the page
}

var base = Style{Bond: 30, Line: 1.5, Heavy: 3.4, Gap: 5, Wide: 6, Font: 14, Small: 10, Words: 12, Margin: 14}

// Screen, Print and Dark are the three styles: dark ink on white, the ink of the page, light ink on dark.
var (
	Screen = styled("screen", "#20242a", "#ffffff")
	Print  = styled("print", "currentColor", "")
	Dark   = styled("dark", "#e9e6df", "#171a1d")
)

func styled(name, ink, ground string) Style {
	s := base
	s.Name, s.Ink, s.Ground = name, ink, ground
	return s
}

// StyleNames lists the names that StyleNamed knows.
const StyleNames = "screen, print or dark"

// StyleNamed returns a style by its name.
func StyleNamed(name string) (Style, bool) {
	for _, s := range []Style{Screen, Print, Dark} {
		if s.Name == name {
			return s, true
		}
	}
	return Style{}, false
}
