package report

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"rampwright/problems"
)

// Least and most results that are compared.
const (
	LeastCompared = 2
	MostCompared  = 50
)

// CompareDocument holds several designs side by side.
type CompareDocument struct {
	Format  int        `json:"format"`
	Program string     `json:"program"`
	Results []Compared `json:"results"`
	Notes   []string   `json:"notes"`
}

// Compared is one of them, as its folder has it.
type Compared struct {
	Folder    string `json:"folder"`
	Title     string `json:"title"`
	Program   string `json:"program"`
	Status    string `json:"status"`
	BriefHash string `json:"brief_hash"`
	Seed      int64  `json:"seed"`
	Aim       Aim    `json:"aim"`
	Feasible  bool   `json:"feasible"`
	// Confidence is what the brief asks of each limit under its tolerances; absent
	// where it asks for none.
	Confidence *ComparedConfidence    `json:"confidence,omitempty"`
	Variables  Object[Number]         `json:"variables"`
	Exact      Object[Object[Number]] `json:"exact"`
	Limits     []Limit                `json:"limits"`
	Inlet      *Shape                 `json:"inlet"`
}

// ComparedConfidence is a confidence asked for, and whether the design reaches it.
type ComparedConfidence struct {
	Confidence Number `json:"confidence"`
	Met        bool   `json:"met"`
}

// Named is a result folder with the name it is shown under.
type Named struct {
	Name string
	Folder
}

// NewCompare reads the folders and sets them side by side, in the order given. It
// returns *DamagedFolder for files that cannot be read.
func NewCompare(program string, folders []Named) (*CompareDocument, error) {
	d := &CompareDocument{Format: format, Program: program, Notes: []string{}}
	var found []string
	for _, f := range folders {
		r, err := readResult(Folder{Result: f.Result, Run: f.Run})
		if err != nil {
			found = append(found, f.Name+": "+err.Error())
			continue
		}
		d.Results = append(d.Results, Compared{
			Folder: f.Name, Title: r.Title, Program: r.Program, Status: r.Status, BriefHash: r.BriefHash, Seed: r.Seed,
			Aim: r.Best.Aim, Feasible: r.Best.Feasible, Confidence: r.Confidence.compared(), Variables: r.Best.Variables, Exact: r.Best.Exact, Limits: r.Best.Limits, Inlet: r.Inlet,
		})
	}
	if found != nil {
		return nil, &DamagedFolder{found}
	}
	d.Notes = append(d.Notes, d.notes()...)
	return d, nil
}

// JSON returns the document as indented JSON.
func (d *CompareDocument) JSON() []byte { return document(d) }

// notes warn of what does not compare.
func (d *CompareDocument) notes() []string {
	var notes []string
	first := &d.Results[0]
	differ := func(same func(c *Compared) bool, note string) {
		for i := range d.Results {
			if !same(&d.Results[i]) {
				notes = append(notes, note)
				return
			}
		}
	}
	differ(func(*Compared) bool { return d.oneAim() }, "The aims differ: their values do not compare.")
	differ(func(c *Compared) bool { return sameBounds(c.Limits, first.Limits) }, "The limits differ: each margin is to the result's own limit.")
	differ(func(c *Compared) bool { return c.Feasible }, "Some result does not hold every limit of its brief: its aim is no better for being higher or lower.")
	differ(func(c *Compared) bool { return c.asked() == first.asked() }, "The confidences asked for differ: a design that holds its limits with a higher one pays for it in the aim.")
	differ(func(c *Compared) bool { return c.Confidence == nil || c.Confidence.Met }, "Some result does not reach the confidence of its brief.")
	differ(func(c *Compared) bool { return c.Program == first.Program }, "The results were written by different versions of the program.")
	return notes
}

// compared is what a comparison tells of a confidence; nil without one.
func (c *Confidence) compared() *ComparedConfidence {
	if c == nil {
		return nil
	}
	return &ComparedConfidence{c.Confidence, c.Met}
}

// asked is the confidence asked for, 0 without.
func (c *Compared) asked() Number {
	if c.Confidence == nil {
		return 0
	}
	return c.Confidence.Confidence
}

// confidenceText is the confidence asked for and what became of it.
func (c *Compared) confidenceText() string {
	switch k := c.Confidence; {
	case k == nil:
		return "none"
	case k.Met:
		return fmt.Sprintf("%g %%", 100*float64(k.Confidence))
	default:
		return fmt.Sprintf("%g %%, not met", 100*float64(k.Confidence))
	}
}

// someConfidence reports whether a confidence was asked for anywhere.
func (d *CompareDocument) someConfidence() bool {
	return slices.ContainsFunc(d.Results, func(c Compared) bool { return c.Confidence != nil })
}

// oneAim reports whether every result pursues the same aim.
func (d *CompareDocument) oneAim() bool {
	a := &d.Results[0].Aim
	return !slices.ContainsFunc(d.Results, func(c Compared) bool {
		return c.Aim.Text != a.Text || c.Aim.Where != a.Where || c.Aim.Highest != a.Highest
	})
}

func sameBounds(a, b []Limit) bool {
	return slices.EqualFunc(a, b, func(a, b Limit) bool {
		return a.Quantity == b.Quantity && a.At == b.At && a.Member == b.Member && sameNumber(a.Low, b.Low) && sameNumber(a.High, b.High)
	})
}

func sameNumber(a, b Number) bool {
	return a == b || math.IsNaN(float64(a)) && math.IsNaN(float64(b))
}

// best is the index of the best aim among results that hold every limit; -1 where
// the aims do not compare or none does.
func (d *CompareDocument) best() int {
	best := -1
	if !d.oneAim() {
		return best
	}
	for i := range d.Results {
		c := &d.Results[i]
		if !c.Feasible || !finite(float64(c.Aim.Exact)) {
			continue
		}
		if best < 0 || c.Aim.Exact != d.Results[best].Aim.Exact && (c.Aim.Exact > d.Results[best].Aim.Exact) == c.Aim.Highest {
			best = i
		}
	}
	return best
}

// variableNames is every searched value, in the order they come.
func (d *CompareDocument) variableNames() []string {
	var names []string
	for i := range d.Results {
		for _, v := range d.Results[i].Variables {
			if !slices.Contains(names, v.Name) {
				names = append(names, v.Name)
			}
		}
	}
	return names
}

// limitKey is what margins of several results stand beside each other by.
type limitKey struct{ quantity, at string }

func (k limitKey) String() string {
	if k.at == problems.Geometry {
		return k.quantity
	}
	return k.quantity + " at " + k.at
}

// limitKeys is every limit asked for or on by default, in the order they come,
// where some result has a margin, and of the model's own those that bind somewhere.
func (d *CompareDocument) limitKeys() []limitKey {
	var keys []limitKey
	for i := range d.Results {
		for _, l := range d.Results[i].Limits {
			tells := !l.Met || l.Active || l.Kind != problems.Hard.String() && finite(float64(l.Margin))
			if key := (limitKey{l.Quantity, l.At}); tells && !slices.Contains(keys, key) {
				keys = append(keys, key)
			}
		}
	}
	return keys
}

// least is the index of the limit of a key with the least margin; -1 where the
// result has none with a value.
func (c *Compared) least(key limitKey) int {
	least := -1
	for i := range c.Limits {
		l := &c.Limits[i]
		if l.Quantity != key.quantity || l.At != key.at || !finite(float64(l.Margin)) {
			continue
		}
		if least < 0 || l.Margin < c.Limits[least].Margin {
			least = i
		}
	}
	return least
}

// without says why a result has no margin on a limit: it breaks it, its quantity
// having no value, or is not asked.
func (c *Compared) without(key limitKey) string {
	for _, l := range c.Limits {
		if l.Quantity == key.quantity && l.At == key.at && !l.Met {
			return "no value"
		}
	}
	return none
}

// Text returns the document for a terminal of that width.
func (d *CompareDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", fmt.Sprintf("%d results", len(d.Results)), "")
	for _, note := range d.Notes {
		p.wrap("  ! ", note, "    ")
	}
	p.heading("Results")
	best := d.best()
	t := &table{columns: []column{{head: "no."}, {head: "folder", left: true}, {head: "title", left: true, drop: 1}, {head: "status", left: true}, {head: d.aimHead()}, {left: true}}}
	some := d.someConfidence()
	if some {
		t.columns = slices.Insert(t.columns, 4, column{head: "confidence", left: true})
	}
	for i := range d.Results {
		c, mark := &d.Results[i], ""
		if i == best {
			mark = "best"
		}
		cells := []string{strconv.Itoa(i + 1), c.Folder, c.Title, statusWords(c.Status), significant(float64(c.Aim.Exact)), mark}
		if some {
			cells = slices.Insert(cells, 4, c.confidenceText())
		}
		t.add(cells...)
	}
	p.table(t)
	variables := d.variableNames()
	d.side(p, "Searched values", "searched", variables, func(c *Compared, row int) string {
		v, ok := c.Variables.Get(variables[row])
		if !ok {
			return none
		}
		return significant(float64(v))
	})
	keys := d.limitKeys()
	var names []string
	for _, k := range keys {
		names = append(names, k.String())
	}
	d.side(p, "Margins, in the unit of the quantity", "limit", names, func(c *Compared, row int) string {
		if i := c.least(keys[row]); i >= 0 && c.Limits[i].Active {
			return "0"
		} else if i >= 0 {
			return significant(float64(c.Limits[i].Margin))
		}
		return c.without(keys[row])
	})
	return p.String()
}

func (d *CompareDocument) aimHead() string {
	if d.oneAim() {
		return d.Results[0].Aim.Text
	}
	return "aim"
}

// side writes tables with one row a name and one column a result, as many side by
// side as find room.
func (d *CompareDocument) side(p *page, title, head string, names []string, value func(c *Compared, row int) string) {
	if len(names) == 0 {
		return
	}
	const cell = 11 // columns of text, at most, that a number and its gap take
	widest := len(head)
	for _, name := range names {
		widest = max(widest, len(name))
	}
	abreast := max(1, (p.width-len(indent)-widest)/cell)
	p.heading(title)
	for from := 0; from < len(d.Results); from += abreast {
		to := min(from+abreast, len(d.Results))
		t := &table{columns: []column{{head: head}}}
		for i := from; i < to; i++ {
			t.columns = append(t.columns, column{head: "no. " + strconv.Itoa(i+1)})
		}
		for row, name := range names {
			cells := []string{name}
			for i := from; i < to; i++ {
				cells = append(cells, value(&d.Results[i], row))
			}
			t.add(cells...)
		}
		if from > 0 {
			p.WriteByte('\n')
		}
		p.table(t)
	}
}
