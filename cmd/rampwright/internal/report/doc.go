// Package report turns exact results into documents: plain data with a fixed
// order of keys, and from these the JSON a script relies on, the text a person
// reads, and the table of all evaluations. It computes no physics; what it adds
// are the cautions a result raises.
package report

// format is the version of the JSON documents: adding a field keeps it, a change
// of meaning raises it.
const format = 1

// Head says what a document belongs to.
type Head struct {
	Program   string // name and version
	Title     string // of the brief
	BriefHash string
	Seed      int64
}
