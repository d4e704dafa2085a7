package chart

// comfortInk is the ground of margins with room.
const comfortInk = "#dfece6"

// Shade is an ink on light paper and the one that takes its place on dark paper.
type Shade struct{ Light, Dark string }

// Shades lists every ink of the drawings with its dark counterpart, for a page
// that shows them on dark ground: each of text keeps a contrast of 4.5 and more.
// The colours of maps stay as they are.
func Shades() []Shade {
	return []Shade{
		{paper, "#161b20"}, {darkInk, "#e8ecef"}, {softInk, "#aeb8c1"}, {faintInk, "#56616b"}, {hatchInk, "#76818b"},
		{solidInk, "#2a3138"}, {cautionInk, "#ff9a5c"}, {comfortInk, "#1f3a31"},
		{"#005f9e", "#5db4ee"}, {"#c24e00", "#ff9a4d"}, {"#8a2f7c", "#dc8fd0"}, {"#45535f", "#a9b6c2"}, {"#7a6200", "#d2b53c"}, {"#00735a", "#45c4a4"},
	}
}
