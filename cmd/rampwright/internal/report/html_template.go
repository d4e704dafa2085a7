package report

import (
	"bytes"
	"fmt"
	"html/template"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
)

// write renders a sheet: one file, no script, nothing fetched.
func (s *sheet) write() ([]byte, error) {
	var b bytes.Buffer
	err := pageTemplate.Execute(&b, struct {
		*sheet
		Style template.CSS
	}{s, template.CSS(chart.FaceStyle() + pageStyle + darkStyle())})
	return b.Bytes(), err
}

// darkStyle puts the dark ground and every ink's counterpart in place of the
// light ones, on screens that ask for it.
func darkStyle() string {
	var b strings.Builder
	b.WriteString("@media screen and (prefers-color-scheme: dark) {\n")
	b.WriteString(":root{--ground:#0f1317;--sheet:#161b20;--ink:#e8ecef;--soft:#aeb8c1;--line:#3c4650;--tint:#1d2329;--alert:#ff9a5c;--good:#45c4a4;--mark:#5db4ee}\n")
	for _, s := range chart.Shades() {
		fmt.Fprintf(&b, "svg [fill=%q]{fill:%s} svg [stroke=%q]{stroke:%s}\n", s.Light, s.Dark, s.Light, s.Dark)
	}
	b.WriteString("}\n")
	return b.String()
}

// pageStyle is a drawing sheet: a frame, a title block, heads in the margin.
const pageStyle = `
:root{--ground:#eceae4;--sheet:#fdfdfb;--ink:#1c2530;--soft:#55616d;--line:#c3c9ce;--tint:#f1f2ef;--alert:#a63d00;--good:#00735a;--mark:#005f9e}
*{box-sizing:border-box}
html{-webkit-text-size-adjust:100%}
body{margin:0;background:var(--ground);color:var(--ink);font:15px/1.5 "` + chart.Family + `","Liberation Sans",Arial,Helvetica,sans-serif;font-variant-numeric:tabular-nums}
main{max-width:1320px;margin:18px auto;background:var(--sheet);border:2px solid var(--ink);outline:1px solid var(--line);outline-offset:-8px;padding:30px 34px}
header{display:grid;grid-template-columns:1fr minmax(260px,380px);gap:28px;align-items:start;border-bottom:2px solid var(--ink);padding-bottom:20px}
h1{font-size:27px;line-height:1.2;margin:0 0 10px}
h2{font-size:15px;line-height:1.3;margin:0;padding-top:3px;border-top:4px solid var(--mark);letter-spacing:.02em}
.stamp{display:inline-block;border:2px solid var(--alert);color:var(--alert);font-weight:bold;padding:2px 10px;margin-bottom:12px;letter-spacing:.06em}
.stamp.verified{border-color:var(--good);color:var(--good)}
.answer{font-size:18px;line-height:1.45;margin:0}
.block{margin:0;border:1px solid var(--ink);display:grid;grid-template-columns:minmax(0,max-content) minmax(9em,1fr);font-size:13px}
.block dt,.block dd{margin:0;padding:3px 9px;border-top:1px solid var(--line);overflow-wrap:anywhere}
.block dt{color:var(--soft);border-right:1px solid var(--line)}
.block dt:first-of-type,.block dd:first-of-type{border-top:0}
section{display:grid;grid-template-columns:130px minmax(0,1fr);gap:26px;padding:24px 0;border-bottom:1px solid var(--line)}
section:last-of-type{border-bottom:0}
p{margin:0 0 10px;max-width:78ch}
ul{margin:0 0 10px;padding-left:20px;max-width:84ch}
li{margin-bottom:6px}
#cautions li{border-left:4px solid var(--alert);list-style:none;padding-left:12px;margin-left:-20px}
.warning{border-left:4px solid var(--alert);padding-left:12px;overflow-wrap:anywhere}
.wide{overflow-x:auto;margin:0 0 16px}
table{border-collapse:collapse;font-size:13px;min-width:50%}
caption{text-align:left;font-weight:bold;padding:0 0 5px}
th,td{padding:3px 10px;text-align:left;border-bottom:1px solid var(--line);vertical-align:middle}
th{font-weight:normal}
thead th.n{text-align:right}
thead th{color:var(--soft);border-bottom:1.5px solid var(--ink);vertical-align:bottom}
thead th.n{min-width:5.5em}
thead th.n span{overflow-wrap:anywhere}
tbody th{white-space:nowrap}
td.n,th.n{text-align:right}
td.n{white-space:nowrap}
tbody tr:nth-child(even){background:var(--tint)}
.bar{display:block;width:240px;height:auto}
figure{margin:0 0 16px}
figcaption{font-size:13px;color:var(--soft);max-width:84ch;padding-top:4px}
.picture{overflow-x:auto;border:1px solid var(--line);background:var(--sheet)}
.picture>svg{display:block;width:100%;height:auto;min-width:640px;max-width:1000px}
.small{display:grid;grid-template-columns:repeat(auto-fill,minmax(290px,1fr));gap:14px}
.small .picture>svg{min-width:0}
#quantities>div{display:flex;flex-wrap:wrap;gap:0 30px;align-items:flex-start}
#quantities table{min-width:0}
#quantities ul{flex-basis:100%}
footer{font-size:12.5px;color:var(--soft);padding-top:14px}
@media screen and (max-width:760px){
main{margin:0;border-width:0;outline:0;padding:16px 14px}
header{grid-template-columns:1fr;gap:16px}
section{grid-template-columns:minmax(0,1fr);gap:10px}
h1{font-size:22px}
table{font-size:12px}
th,td{padding:3px 6px}
tbody th{position:sticky;left:0;background:var(--sheet);white-space:normal;overflow-wrap:anywhere;min-width:30vw;max-width:42vw}
tbody td:not(.n){min-width:6em}
tbody tr:nth-child(even) th{background:var(--tint)}
}
@page{size:A4;margin:13mm}
@media print{
:root{--ground:#fff;--sheet:#fff}
body{font-size:10.5pt}
main{margin:0;border:0;outline:0;padding:0;max-width:none}
section{display:block}
h2{margin-bottom:8px}
h2,caption,thead{break-after:avoid}
header{grid-template-columns:1fr 84mm}
.block{font-size:8pt}
table{font-size:7.6pt;min-width:0}
th,td{padding:1.5px 4px}
thead th.n{min-width:4.4em}
tbody th{white-space:normal}
.bar{width:34mm}
.wide,.picture{overflow:visible}
.picture>svg{min-width:0;max-width:none}
.small{grid-template-columns:repeat(2,minmax(0,1fr));gap:3mm}
#quantities>div{display:block}
figure,tr,li{break-inside:avoid}
p{break-inside:avoid;orphans:3}
}
`

var pageTemplate = template.Must(template.New("page").Funcs(template.FuncMap{"broken": broken}).Parse(`<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8" />
<meta name="viewport" content="width=device-width, initial-scale=1" />
<meta name="color-scheme" content="light dark" />
<title>{{range .Title}}{{.Text}}{{end}}</title>
<style>{{.Style}}</style>
</head>
<body>
<main>
<header>
<div>
<h1>{{range .Title}}{{template "cell" .}}{{end}}</h1>
{{with .Status}}<div class="stamp {{$.Stamp}}">{{template "cell" .}}</div>
{{end}}<p class="answer">{{range .Answer}}{{template "cell" .}}{{end}}</p>
</div>
<dl class="block">
{{range .Facts}}<dt>{{.Name}}</dt><dd>{{template "cell" .Value}}</dd>
{{end}}</dl>
</header>
{{range .Sections}}{{if .Blocks}}<section id="{{.ID}}">
<h2>{{.Head}}</h2>
<div>
{{range .Blocks}}{{$small := .Small}}{{if .Paragraph}}<p>{{range .Paragraph}}{{template "cell" .}}{{end}}</p>
{{end}}{{if .Warning}}<p class="warning">{{range .Warning}}{{template "cell" .}}{{end}}</p>
{{end}}{{if .List}}<ul>
{{range .List}}<li>{{range .}}{{template "cell" .}}{{end}}</li>
{{end}}</ul>
{{end}}{{with .Table}}<div class="wide"><table>
{{if .Caption}}<caption>{{range .Caption}}{{template "cell" .}}{{end}}</caption>
{{end}}<thead><tr>{{range .Head}}{{if or .Text .Bar}}<th scope="col"{{if .Number}} class="n"{{end}}>{{template "cell" .}}</th>{{else}}<td></td>{{end}}{{end}}</tr></thead>
<tbody>
{{range .Rows}}<tr>{{range $i, $c := .}}{{if $i}}<td{{if $c.Number}} class="n"{{end}}>{{template "cell" $c}}</td>{{else}}<th scope="row"{{if $c.Number}} class="n"{{end}}>{{template "cell" $c}}</th>{{end}}{{end}}</tr>
{{end}}</tbody>
</table></div>
{{end}}{{if .Figures}}<div class="{{if $small}}small{{else}}broad{{end}}">
{{range .Figures}}<figure><div class="picture">{{.Picture}}</div>{{if .Caption}}<figcaption>{{range .Caption}}{{template "cell" .}}{{end}}</figcaption>{{end}}</figure>
{{end}}</div>
{{end}}{{end}}</div>
</section>
{{end}}{{end}}</main>
</body>
</html>
{{define "cell"}}{{if .Parts}}{{range .Parts}}{{template "cell" .}}{{end}}{{else if .Bar}}{{.Bar}}{{else if .Place}}<span class="place">{{.Text}}</span>{{else if .Value}}<data value="{{.Value}}"{{if .Share}} class="percent"{{end}} data-from="{{.From}}">{{.Text}}</data>{{else if and .From .Text}}<span data-from="{{.From}}">{{broken .Text}}</span>{{else}}{{broken .Text}}{{end}}{{end}}`))

// broken is text in which a line may end behind each underscore and slash of a
// name.
func broken(text string) template.HTML {
	return template.HTML(nameBreaks.Replace(template.HTMLEscapeString(text)))
}

var nameBreaks = strings.NewReplacer("_", "_<wbr />", "/", "/<wbr />")
