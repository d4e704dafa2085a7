package brief

import (
	"strings"
	"unicode/utf8"
)

// nearest returns the name closest in spelling to the word typed, or "" when
// none is near: at most one edit in three characters, letter case ignored.
// The first of equals wins.
func nearest(typed string, names []string) string {
	best, least := "", utf8.RuneCountInString(typed)/3+1
	if len(typed) > 100 {
		return ""
	}
	for _, name := range names {
		if d := distance(strings.ToLower(typed), strings.ToLower(name)); d < least || d == 0 {
			best, least = name, d
		}
	}
	return best
}

// distance is the number of single-character insertions, deletions and
// substitutions between two words, with a swap of neighbours counted as one
// (optimal string alignment; Damerau 1964, Levenshtein 1966).
func distance(a, b string) int {
	s, t := []rune(a), []rune(b)
	before, last, row := make([]int, len(t)+1), make([]int, len(t)+1), make([]int, len(t)+1)
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(s); i++ {
		row[0] = i
		for j := 1; j <= len(t); j++ {
			change := 1
			if s[i-1] == t[j-1] {
				change = 0
			}
			row[j] = min(last[j]+1, row[j-1]+1, last[j-1]+change)
			if i > 1 && j > 1 && s[i-1] == t[j-2] && s[i-2] == t[j-1] {
				row[j] = min(row[j], before[j-2]+1)
			}
		}
		before, last, row = last, row, before
	}
	return last[len(t)]
}

// conversion says how other units become the one a key is stated in.
var conversion = map[string]string{
	"m":   "1 mm = 0.001 m, 1 ft = 0.3048 m, 1 in = 0.0254 m",
	"km":  "1 m = 0.001 km, 1 ft = 0.0003048 km",
	"kPa": "1 Pa = 0.001 kPa, 1 bar = 100 kPa, 1 psi = 6.894757 kPa, 1 psf = 0.04788026 kPa",
	"K":   "K = deg C + 273.15 = deg R / 1.8",
	"deg": "1 rad = 57.29578 deg",
}

// unitWords are the endings by which people name the unit of a value.
var unitWords = []string{
	"mm", "cm", "m", "km", "ft", "in", "inch", "inches", "deg", "degrees", "degree", "rad", "radians",
	"pa", "kpa", "mpa", "hpa", "bar", "mbar", "atm", "psi", "psf", "k", "c", "f", "r", "kelvin", "celsius",
}

// stem drops a unit from the end of a name: "width_mm" and "width" both give
// "width".
func stem(name string) string {
	name = strings.ToLower(name)
	if cut := strings.LastIndexByte(name, '_'); cut > 0 {
		for _, unit := range unitWords {
			if name[cut+1:] == unit {
				return name[:cut]
			}
		}
	}
	return name
}

// named is a name with the unit it is stated in.
type named struct{ name, unit string }

// unitHint returns the hint for a name that is right but for its unit, or "".
func unitHint(typed string, names []named) string {
	for _, n := range names {
		if n.unit != "" && typed != n.name && stem(typed) == stem(n.name) {
			return "write " + n.name + ", in " + n.unit + " (" + conversion[n.unit] + ")"
		}
	}
	return ""
}

// nameHint returns the best hint for an unknown name: its unit, else the
// nearest spelling, else "".
func nameHint(typed string, names []named) string {
	if hint := unitHint(typed, names); hint != "" {
		return hint
	}
	bare := make([]string, len(names))
	for i, n := range names {
		bare[i] = n.name
	}
	return nearestHint(typed, bare)
}

// nearestHint suggests the nearest spelling, "" when none is near.
func nearestHint(typed string, names []string) string {
	if near := nearest(typed, names); near != "" {
		return "did you mean " + near + "?"
	}
	return ""
}

// join lists words with commas.
func join(words []string) string { return strings.Join(words, ", ") }
