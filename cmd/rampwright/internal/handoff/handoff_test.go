package handoff

import (
	"encoding/csv"
	"errors"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestProfileText(t *testing.T) {
	var out strings.Builder
	err := WriteProfile(&out, []ProfilePoint{
		{"ramp", "leading edge", 0, math.Copysign(0, -1)},
		{"ramp", "corner 2", 0.1, 1.0 / 3},
		{"cowl inner", "", 2, 1e-7},
		{"cowl, outer", `the "lip"`, 0.4613, 0.16},
	})
	if err != nil {
		t.Fatal(err)
	}
	want := `surface,point,x_m,y_m
ramp,leading edge,0,0
ramp,corner 2,0.1,0.3333333333333333
cowl inner,,2,1e-07
"cowl, outer","the ""lip""",0.4613,0.16
`
	if out.String() != want {
		t.Errorf("got\n%swant\n%s", out.String(), want)
	}
}

func TestStationsText(t *testing.T) {
	none := math.NaN()
	var out strings.Builder
	err := WriteStations(&out, []FlightPoint{
		{"cruise", 6, 0, "attached", []Station{
			{"free stream", 6, 0, none, none, none, 1, 1, 1, 1.984, 223.18},
			{"ramp 2", 4.9, 15.3, 17.25, 25.33, 1.6, 2.8, 1.39, 0.89, 5.6, 310.5},
		}},
		{"takeover", 4.5, -1.5, "ramp 1 detached", nil},
	})
	if err != nil {
		t.Fatal(err)
	}
	want := `point,status,station,point_mach,incidence_deg,mach,flow_angle_deg,wave_angle_deg,wave_angle_absolute_deg,normal_mach,static_pressure_ratio,static_temperature_ratio,total_pressure_ratio,pressure_kPa,temperature_K
cruise,attached,free stream,6,0,6,0,,,,1,1,1,1.984,223.18
cruise,attached,ramp 2,6,0,4.9,15.3,17.25,25.33,1.6,2.8,1.39,0.89,5.6,310.5
takeover,ramp 1 detached,,4.5,-1.5,,,,,,,,,,
`
	if out.String() != want {
		t.Errorf("got\n%swant\n%s", out.String(), want)
	}
}

// Every double and every text comes back as it was.
func TestProfileReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		point := rapid.Custom(func(t *rapid.T) ProfilePoint {
			return ProfilePoint{
				Surface: rapid.StringMatching(`[a-z ,"]{1,12}`).Draw(t, "surface"),
				Name:    rapid.StringMatching(`[a-z0-9 ,"\n]{0,12}`).Draw(t, "name"),
				X:       rapid.Float64().Draw(t, "x"),
				Y:       rapid.Float64().Draw(t, "y"),
			}
		})
		points := rapid.SliceOfN(point, 0, 8).Draw(t, "points")
		var out strings.Builder
		if err := WriteProfile(&out, points); err != nil {
			t.Fatal(err)
		}
		rows, err := csv.NewReader(strings.NewReader(out.String())).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		if len(rows) != len(points)+1 {
			t.Fatalf("%d rows of %d points", len(rows), len(points))
		}
		for i, p := range points {
			row := rows[i+1]
			x, _ := strconv.ParseFloat(row[2], 64) // a failure reads as another number
			y, err := strconv.ParseFloat(row[3], 64)
			if err != nil || row[0] != p.Surface || row[1] != p.Name || x != p.X || y != p.Y {
				t.Errorf("point %d: wrote %+v, read %q", i, p, row)
			}
		}
	})
}

func TestBadNumbersAreRefused(t *testing.T) {
	none, inf := math.NaN(), math.Inf(1)
	profile := func(x, y float64) error {
		return WriteProfile(&strings.Builder{}, []ProfilePoint{{"ramp", "", 0, 0}, {"ramp", "", x, y}})
	}
	stations := func(p FlightPoint) error { return WriteStations(&strings.Builder{}, []FlightPoint{p}) }
	cases := map[string]struct {
		err  error
		want NotFinite
	}{
		"missing x":         {profile(none, 0), NotFinite{"profile", 2, "x_m", none}},
		"infinite y":        {profile(0, inf), NotFinite{"profile", 2, "y_m", inf}},
		"missing condition": {stations(FlightPoint{Name: "a", Mach: none}), NotFinite{"stations", 1, "point_mach", none}},
		"infinite state": {stations(FlightPoint{Name: "a", Stations: []Station{{Name: "s"}, {Name: "t", TemperatureK: -inf}}}),
			NotFinite{"stations", 2, "temperature_K", -inf}},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			var got *NotFinite
			if !errors.As(c.err, &got) {
				t.Fatalf("got %v", c.err)
			}
			if got.Error() != c.want.Error() {
				t.Errorf("got %v, want %v", got, &c.want)
			}
		})
	}
}

func TestNamelessEntriesAreRefused(t *testing.T) {
	var out strings.Builder
	cases := map[string]struct {
		err  error
		want Incomplete
	}{
		"surface": {WriteProfile(&out, []ProfilePoint{{"", "lip", 0, 0}}), Incomplete{"profile", 1, "surface"}},
		"point":   {WriteStations(&out, []FlightPoint{{}}), Incomplete{"stations", 1, "point"}},
		"station": {WriteStations(&out, []FlightPoint{{Name: "a", Stations: []Station{{Name: "s"}, {}}}}), Incomplete{"stations", 2, "station"}},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			var got *Incomplete
			if !errors.As(c.err, &got) || *got != c.want {
				t.Errorf("got %v, want %v", c.err, &c.want)
			}
		})
	}
	if out.Len() > 0 {
		t.Errorf("a refused table left %q behind", out.String())
	}
}

type brokenWriter struct{ err error }

func (w brokenWriter) Write([]byte) (int, error) { return 0, w.err }

func TestWriteErrorsReachTheCaller(t *testing.T) {
	full := brokenWriter{errors.New("disk full")}
	if err := WriteProfile(full, []ProfilePoint{{"ramp", "", 0, 0}}); !errors.Is(err, full.err) {
		t.Errorf("profile: %v", err)
	}
	if err := WriteStations(full, nil); !errors.Is(err, full.err) {
		t.Errorf("stations: %v", err)
	}
}
