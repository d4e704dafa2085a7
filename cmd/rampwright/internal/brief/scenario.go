package brief

import (
	"embed"
	"path"
	"sort"
	"strings"
)

//go:embed scenarios/*.yaml
var scenarioFiles embed.FS

// Scenarios returns the names of the starter briefs, sorted.
func Scenarios() []string {
	entries, err := scenarioFiles.ReadDir("scenarios")
	if err != nil {
		panic("brief: the starters are part of the program: " + err.Error())
	}
	var names []string
	for _, entry := range entries {
		names = append(names, strings.TrimSuffix(entry.Name(), path.Ext(entry.Name())))
	}
	sort.Strings(names)
	return names
}

// Scenario returns the commented starter of that name; false when there is
// none, with the nearest name that exists, if any.
func Scenario(name string) (data []byte, near string, ok bool) {
	if !contains(Scenarios(), name) {
		return nil, nearest(name, Scenarios()), false
	}
	data, err := scenarioFiles.ReadFile("scenarios/" + name + ".yaml")
	if err != nil {
		panic("brief: the starters are part of the program: " + err.Error())
	}
	return data, "", true
}
