package sheet

import (
	"html/template"
	"io"
	"strings"

	"shelfward/molecule/draw"
)

// HTML prints the sheet as one self-contained page for printing: one A4 page per step, black on white.
func (s *Sheet) HTML(w io.Writer) error { return page.Execute(w, s) }

var page = template.Must(template.New("sheet").Funcs(template.FuncMap{
	"grams": grams, "digits": digits, "shown": shown, "cas": casText, "form": formText, "mass": massText, "volume": volumeText,
	"role": roleText, "equiv": func(x float64) string { return positive(x, "%.3g") }, "molar": func(x float64) string { return positive(x, "%.2f") },
	"mmol": positiveDigits, "percent": func(x float64) string { return digits(100 * x) }, "steps": joinInts, "have": haveText,
	"none": orNone, "pictograms": pictograms,
	"drawing": func(c Compound) template.HTML {
		return template.HTML(draw.SVG(c.Molecule, draw.Options{Title: shown(c)}))
	},
	"short": func(s string) string { return strings.TrimSpace(s) },
	"ml": func(x float64) string {
		if x <= 0 {
			return ""
		}
		return millilitres(x)
	},
}).Parse(pageText))

const pageText = `<!DOCTYPE html>
<html lang="en"><head><meta charset="utf-8"><title>Route sheet {{.Code}}</title>
<style>
@page { size: A4; margin: 15mm }
body { font: 10.5pt/1.35 "Liberation Serif", Georgia, serif; color: #000; background: #fff; max-width: 190mm; margin: 0 auto; padding: 4mm }
h1 { font-size: 17pt; margin: 0 0 2mm } h2 { font-size: 13pt; margin: 0 0 2mm; border-bottom: 1.5pt solid #000 } h3 { font-size: 11pt; margin: 3mm 0 1mm; letter-spacing: .04em }
table { border-collapse: collapse; width: 100%; margin: 1mm 0 2mm } th, td { border-bottom: .5pt solid #000; padding: .8mm 1.2mm; text-align: left; vertical-align: top; font-size: 9.5pt } th { border-bottom: 1.2pt solid #000 } td.n { text-align: right; white-space: nowrap }
.doubt, .stop { border: 1.5pt solid #000; padding: 1.5mm 2mm; margin: 0 0 1.5mm } .stop b, .doubt b { letter-spacing: .06em }
section.step { break-before: page; padding-top: 2mm } ol { margin: 1mm 0; padding-left: 7mm } ul { margin: 1mm 0; padding-left: 5mm }
.scheme { display: flex; align-items: center; gap: 3mm; flex-wrap: wrap } .scheme figure { margin: 0; text-align: center } figcaption { font-size: 9pt; max-width: 60mm }
.box { display: inline-block; width: 3.2mm; height: 3.2mm; border: .8pt solid #000; vertical-align: -0.4mm } .write { display: inline-block; border-bottom: .6pt solid #000; width: 22mm }
</style></head><body>
<h1>Route sheet {{.Code}}</h1>
<p>{{len .Steps}} steps, longest run {{.LongestRun}}. shelfward {{.Version}}{{if .Printed}}, printed {{.Printed}}{{end}}.</p>
{{range .Doubts}}<p class="doubt"><b>DOUBT</b> {{.}}</p>{{end}}
{{if .Invented}}<p class="doubt">Stock, places and prices of the shelf used here are <b>INVENTED</b> examples.</p>{{end}}
<div class="scheme"><figure>{{drawing .Target}}<figcaption>{{shown .Target}}</figcaption></figure>
<table style="width:auto"><tr><th>target</th><td>{{shown .Target}}, {{.Target.Formula}}, {{printf "%.2f" .Target.MolarMass}} g/mol<br><code>{{.Target.SMILES}}</code></td></tr>
<tr><th>aim</th><td>{{grams .MakeG}} ({{digits .MakeMmol}} mmol) of isolated product</td></tr>
<tr><th>comes out</th><td>{{grams .LowG}} if every step comes out low, {{grams .HighG}} if every step comes out high</td></tr>
<tr><th>yield</th><td>{{percent .Yield.Usual}} % overall ({{percent .Yield.Low}} to {{percent .Yield.High}}; product of step ranges)</td></tr>
<tr><th>label</th><td>{{none .Label.Signal}}; {{pictograms .}}</td></tr></table></div>
{{if .Evidence}}<h3>Evidence</h3><ul>{{range .Evidence}}<li>{{.}}</li>{{end}}</ul>{{end}}
<h3>Gravest statements</h3><ul>{{range .Gravest}}<li>{{.}}</li>{{else}}<li>none known</li>{{end}}</ul>
{{if .Watched}}<h3>Watched materials</h3><ul>{{range .Watched}}<li>{{.}}</li>{{end}}</ul>{{end}}
<h3>To have ready</h3>
<table><tr><th>material</th><th>steps</th><th>needs, as supplied</th><th></th><th>to be sure</th><th>on the shelf</th></tr>
{{range .Stock}}<tr><td>{{.Name}}{{cas .CAS}}</td><td>{{steps .Steps}}</td><td class="n">{{if gt .MassG 0.0}}{{grams .MassG}}{{else}}as needed{{end}}</td><td class="n">{{ml .VolumeML}}</td><td class="n">{{if gt .MassG 0.0}}{{grams .SureG}}{{end}}</td><td class="n">{{have .}}</td></tr>{{end}}</table>
<p><b>Caution.</b> {{.Caution}}</p>
<p>prepared <span class="write"></span> checked <span class="write"></span> approved <span class="write"></span> emergency contact <span class="write"></span> room, hood <span class="write"></span></p>
{{$sheet := .}}{{range .Steps}}
<section class="step"><h2>Step {{.Number}} of {{len $sheet.Steps}}: {{.Name}} <small>({{$sheet.Code}}, figures {{.OriginMark}}: {{.Origin}})</small></h2>
{{range .Objections}}<p class="doubt"><b>DOUBT</b> {{.}}</p>{{end}}{{range .Flags}}<p class="stop"><b>STOP</b> {{.}}</p>{{end}}
<div class="scheme">{{range $i, $c := .From}}{{if $i}}<span>+</span>{{end}}<figure>{{drawing $c}}<figcaption>{{shown $c}}</figcaption></figure>{{end}}<span style="font-size:16pt">&#8594;</span><figure>{{drawing .Product}}<figcaption>{{shown .Product}}</figcaption></figure></div>
<h3>DO</h3>
<table><tr><th>role</th><th>material</th><th>M</th><th>equiv</th><th>mmol</th><th>mass</th><th>volume</th><th>lot</th><th>weighed</th></tr>
{{range .Charges}}<tr><td>{{role .}}</td><td>{{.Name}}{{cas .CAS}}{{form .Form}}</td><td class="n">{{molar .MolarMass}}</td><td class="n">{{equiv .Equiv}}</td><td class="n">{{mmol .Mmol}}</td><td class="n">{{mass .}}</td><td class="n">{{volume .}}</td><td></td><td></td></tr>{{end}}</table>
<ul>{{range .Hazards}}<li>{{.}}</li>{{end}}</ul>
<ol>{{range .Operations}}<li><span class="box"></span> {{.}}</li>{{end}}</ol>
{{range .Holds}}<p><span class="box"></span> <b>HOLD</b> {{.}}</p>{{end}}
<p>Expected {{grams .ExpectG}} ({{grams .ExpectLowG}} to {{grams .ExpectHighG}}; {{percent .Yield.Low}}-{{percent .Yield.Usual}}-{{percent .Yield.High}} %, {{.OriginMark}}); theory {{grams .TheoryG}}.{{if gt .NextNeedsG 0.0}} Later steps take {{grams .NextNeedsG}}.{{end}}</p>
<p>start <span class="write"></span> end <span class="write"></span> highest temperature <span class="write"></span> crude <span class="write"></span> pure <span class="write"></span></p>
<h3>KNOW</h3>
<table>{{if .Controls}}<tr><th>controls</th><td>{{range .Controls}}{{.}}<br>{{end}}</td></tr>{{end}}{{if .Mixture}}<tr><th>mixture</th><td>{{range .Mixture}}{{.}}<br>{{end}}</td></tr>{{end}}{{if .Watch}}<tr><th>watch</th><td>{{range .Watch}}{{.}}<br>{{end}}</td></tr>{{end}}<tr><th>crude</th><td>{{range .Crude}}{{.}}<br>{{end}}</td></tr><tr><th>waste</th><td>{{range .Waste}}{{.}}<br>{{end}}</td></tr><tr><th>emergency</th><td>{{range .Emergency}}{{.}}<br>{{end}}</td></tr><tr><th>source</th><td>{{range .Sources}}{{.}}<br>{{end}}</td></tr></table>
</section>{{end}}
</body></html>
`
