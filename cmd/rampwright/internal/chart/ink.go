package chart

// Inks on paper. Hues are those that stay apart under the common colour
// deficiencies (Okabe & Ito 2008, darkened for thin strokes); each wave differs
// by its dashes as well, so that the drawing survives a grey print.
const (
	paper      = "#fdfdfb"
	darkInk    = "#1c2530"
	softInk    = "#55616d"
	faintInk   = "#aab3bc"
	hatchInk   = "#8d97a1"
	solidInk   = "#eceeef"
	cautionInk = "#a63d00"
)

// stroke is how one kind of line is drawn. An empty dash is a full line.
type stroke struct {
	ink   string
	width float64
	dash  string
}

var strokes = [...]stroke{
	RampShock:     {"#005f9e", 1.5, ""},
	LipShock:      {"#c24e00", 1.6, "9 3"},
	TerminalShock: {"#8a2f7c", 3, "3 1.5"},
	CowlShock:     {"#45535f", 1.3, "5 3"},
	Expansion:     {"#7a6200", 0.7, "2 2.5"},
	DuctShock:     {"#005f9e", 1.2, "5 2"},
	SlipLine:      {"#55616d", 0.9, "1.5 3"},
}

var streamlineStroke = stroke{"#00735a", 1.3, "12 3 2 3"}
