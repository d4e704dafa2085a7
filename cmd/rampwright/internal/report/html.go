package report

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"
)

// Folder holds the files of a result folder that its page is made of.
type Folder struct {
	Result   []byte // result.json
	Run      []byte // run.json
	Review   []byte // review.json; nil in a folder written before there was one
	SideView []byte // inlet.svg; nil where the contour does not close
	Studies  []StudyFile
}

// RunRecord is run.json: what the result does not depend on.
type RunRecord struct {
	Format       int           `json:"format"`
	Program      string        `json:"program"`
	Started      string        `json:"started"`
	Seconds      float64       `json:"seconds"`
	Platform     string        `json:"platform"`
	Jobs         int           `json:"jobs"`
	ModelCalls   Object[int64] `json:"model_calls"`
	LedgerAnswer Object[int64] `json:"answered_from_ledger"`
}

// DamagedFolder lists the files of a result folder that cannot be read.
type DamagedFolder struct{ Reasons []string }

func (e *DamagedFolder) Error() string {
	return "the result folder is damaged: " + strings.Join(e.Reasons, "; ")
}

// Hint says what to do about it.
func (e *DamagedFolder) Hint() string {
	return "design the brief again; known evaluations are taken from the ledger"
}

// result is a design read back from its folder.
type result struct {
	DesignDocument
	run      RunRecord
	review   *Review
	sideView []byte
	studies  []*studyPage
}

// readResult reads the files of a folder, or returns *DamagedFolder.
func readResult(f Folder) (*result, error) {
	r := &result{sideView: f.SideView}
	var found []string
	read := func(name string, data []byte, into any) {
		if err := json.Unmarshal(data, into); err != nil {
			found = append(found, name+": "+err.Error())
		}
	}
	read("result.json", f.Result, &r.DesignDocument)
	read("run.json", f.Run, &r.run)
	if f.Review != nil {
		r.review = new(Review)
		read("review.json", f.Review, r.review)
	}
	var bad []string
	r.studies, bad = readStudies(f.Studies)
	if found = append(found, bad...); found == nil {
		found = r.defects()
	}
	if found != nil {
		return nil, &DamagedFolder{found}
	}
	return r, nil
}

// defects are what readable files must not hold.
func (r *result) defects() []string {
	var found []string
	if r.Format != format {
		found = append(found, fmt.Sprintf("result.json has format %d, this program reads %d", r.Format, format))
	}
	if len(r.Best.Variables) == 0 && len(r.Best.Exact) == 0 {
		found = append(found, "result.json holds no design")
	}
	if r.review == nil {
		return found
	}
	if r.review.BriefHash != r.BriefHash {
		found = append(found, "review.json belongs to another brief than result.json")
	}
	for _, p := range r.review.Parity {
		if len(p.Exact) != len(p.Predicted) || len(p.Exact) != len(p.Deviation) {
			found = append(found, "review.json: the columns of "+p.Quantity+" differ in length")
		}
	}
	if o := r.review.OffDesign; o != nil {
		n := len(o.Mach)
		if len(o.Recovery) != n || len(o.Capture) != n || len(o.Status) != n {
			found = append(found, "review.json: the columns off design differ in length")
		}
	}
	return found
}

// Page writes the design of a folder as one HTML page. It returns *DamagedFolder
// for files that cannot be read.
func Page(f Folder) ([]byte, error) {
	r, err := readResult(f)
	if err != nil {
		return nil, err
	}
	return r.sheet().write()
}

// sheet lays the page out in the order of a review: what was found, what to be
// wary of, then the evidence.
func (r *result) sheet() *sheet {
	status := statusCell(r.Status, "result", "status")
	return &sheet{
		Title: []cell{quoted(r.Title, "result", "title")}, Status: &status, Stamp: r.Status, Answer: r.answerCells(), Facts: r.facts(),
		Sections: slices.Concat([]chapter{
			r.cautionSection(), r.designSection(), r.confidenceSection(), r.conflictSection(), r.sideViewSection(), r.marginSection(), r.stationSection(),
			r.traceSection(), r.quantitySection(), r.agreementSection(), r.mapSection(), r.offDesignSection(),
		}, r.studySections(), []chapter{r.progressSection(), r.assumptionSection(), r.provenanceSection()}),
	}
}
