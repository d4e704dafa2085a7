package main

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/problems/inlet"
)

// starters are the briefs every new user begins from.
var starters = []string{"veyric-6", "ondrel-3", "halcyre-45"}

func starterBrief(name string) string {
	return filepath.Join("..", "..", "testdata", "briefs", name+".yaml")
}

// ended is one command line that ran to its end.
type ended struct {
	code     int
	out      []byte
	messages string
}

// command runs one command line as main does.
func command(args ...string) ended {
	var out, messages bytes.Buffer
	code := run(args, strings.NewReader(""), &out, &messages)
	return ended{code, out.Bytes(), messages.String()}
}

// designed is a finished design: what the command printed and what it wrote.
type designed struct {
	ended
	err   error
	files map[string][]byte
}

// designStarter runs the design of a starter brief once for all tests.
func designStarter(t *testing.T, name string) *designed {
	t.Helper()
	d := starterDesigns[name]()
	if d.err != nil {
		t.Fatal(d.err)
	}
	if d.code != exitDone {
		t.Fatalf("design %s ended with code %d:\n%s", name, d.code, d.messages)
	}
	return d
}

var starterDesigns = func() map[string]func() *designed {
	once := map[string]func() *designed{}
	for _, name := range starters {
		once[name] = sync.OnceValue(func() *designed { return designOnce(name) })
	}
	return once
}()

func designOnce(name string) *designed {
	dir, err := os.MkdirTemp("", "rampwright-"+name)
	if err != nil {
		return &designed{err: err}
	}
	defer os.RemoveAll(dir)
	folder := filepath.Join(dir, "result")
	d := &designed{ended: command("design", starterBrief(name), "--json", "-o", folder, "--jobs", "2", "--quiet")}
	d.files, d.err = readFolder(folder)
	return d
}

func readFolder(dir string) (map[string][]byte, error) {
	entries, err := os.ReadDir(dir)
	if err != nil {
		return nil, err
	}
	files := map[string][]byte{}
	for _, entry := range entries {
		if files[entry.Name()], err = os.ReadFile(filepath.Join(dir, entry.Name())); err != nil {
			return nil, err
		}
	}
	return files, nil
}

// folder writes the files of a design into a fresh folder.
func (d *designed) folder(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	for name, data := range d.files {
		if err := os.WriteFile(filepath.Join(dir, name), data, 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// decode reads a JSON document into dst.
func decode(t *testing.T, data []byte, dst any) {
	t.Helper()
	if err := json.Unmarshal(data, dst); err != nil {
		t.Fatalf("%v in:\n%s", err, data)
	}
}

// starterStudy is the problem a starter brief poses, with its limits resolved.
func starterStudy(t *testing.T, name string) *study {
	t.Helper()
	file := starterBrief(name)
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	b, err := brief.Read(file, data, nil)
	if err != nil {
		t.Fatal(err)
	}
	problem, err := inlet.New(b.Definition)
	if err != nil {
		t.Fatal(err)
	}
	return &study{
		brief: b, problem: problem,
		limits: b.Resolve(inlet.HardLimits(b.Definition), inlet.DefaultLimits(b.Definition)),
	}
}
