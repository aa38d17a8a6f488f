package compare

import (
	_ "embed"
	"html/template"
	"io"
)

// HTML writes the comparison as one self-contained page, for the screen and for printing in black and
// white. header is what the caller prints above a result: what was read, where the shelf is from.
func (t *Table) HTML(w io.Writer, header []string, caution string) error {
	return page.Execute(w, struct {
		*Table
		Header  []string
		Caution string
		Lines   [][]string
		Plot    template.HTML
	}{t, header, caution, t.lines(), template.HTML(t.plot())})
}

//go:embed page.html
var pageText string

var page = template.Must(template.New("compare").Funcs(template.FuncMap{
	"letter": letterOf, "ways": func(r Row) []string { return r.waysOut() }, "start": func(r Row) string { return r.start() },
	"first": func(f First, t *Table) string { return t.firstText(f) }, "beaten": func(r Row) bool { return len(r.BeatenBy) > 0 },
}).Parse(pageText))
