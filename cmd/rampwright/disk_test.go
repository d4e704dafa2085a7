//go:build linux

package main

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"testing"
)

// diskStudy writes a result of some 130 kilobytes.
var diskStudy = []string{"design", "quick.yaml", "-o", "result", "--json", "--quiet"}

// mountSmall mounts a file system of the size in bytes in a fresh folder. Where
// that takes rights this process lacks it says so and returns "".
func mountSmall(t *testing.T, size int) string {
	t.Helper()
	dir := t.TempDir()
	if err := syscall.Mount("tmpfs", dir, "tmpfs", 0, fmt.Sprintf("size=%d", size)); err != nil {
		t.Logf("no small file system (%v): checking only what needs no rights", err)
		return ""
	}
	t.Cleanup(func() {
		if err := syscall.Unmount(dir, syscall.MNT_DETACH); err != nil {
			t.Error(err)
		}
	})
	return dir
}

// diskFolder puts the brief into a folder and a finished result beside it.
func diskFolder(t *testing.T, dir string) (result map[string][]byte) {
	t.Helper()
	data := readCase(t, filepath.Join(cliCases, "design-json.txtar")).file(t, "quick.yaml")
	if err := os.WriteFile(filepath.Join(dir, "quick.yaml"), data, 0o600); err != nil {
		t.Fatal(err)
	}
	first := spawn(t, dir, diskStudy...)
	if code := first.end(t); code != exitDone {
		t.Fatalf("code %d:\n%s", code, first.messages.String())
	}
	result, err := readFolder(filepath.Join(dir, "result"))
	if err != nil {
		t.Fatal(err)
	}
	return result
}

// refused fails unless a run ended with code 1 and a message that names the
// cause, printed no document, and left the result as it was.
func refused(t *testing.T, what string, run *child, code int, cause string, want map[string][]byte) {
	t.Helper()
	message := run.messages.String()
	if code != exitError || run.out.Len() > 0 || !strings.HasPrefix(message, "rampwright: ") || !strings.Contains(message, cause) {
		t.Errorf("%s: code %d, printed %d bytes, said %q; wanted code %d and %q", what, code, run.out.Len(), message, exitError, cause)
	}
	found, err := readFolder(filepath.Join(run.Dir, "result"))
	if err != nil {
		t.Fatalf("%s: %v", what, err)
	}
	for name, data := range want {
		if string(found[name]) != string(data) {
			t.Errorf("%s: %s of the finished result is not what it was", what, name)
		}
	}
	if len(found) != len(want) {
		t.Errorf("%s: %d files in the finished result, %d before", what, len(found), len(want))
	}
}

// A disk that is full at any moment of a run ends it with code 1 and leaves the
// last result whole; with room again, the run is repeated and replaces it.
func TestFullDisk(t *testing.T) {
	t.Run("limit on the size of files", fileSizeLimit)
	if dir := mountSmall(t, 1<<20); dir != "" {
		t.Run("small disk", func(t *testing.T) { smallDisk(t, dir) })
	}
}

func smallDisk(t *testing.T, dir string) {
	want := diskFolder(t, dir)
	where := map[string]bool{}
	// Another inlet, so that nothing is known of it: its files fill the room left
	// at another moment each time.
	another := append(slices.Clone(diskStudy), "--capture-height-m", "0.3")
	for _, room := range []int{0, 8 << 10, 32 << 10, 64 << 10, 96 << 10} {
		if err := os.RemoveAll(filepath.Join(dir, "result.part")); err != nil {
			t.Fatal(err)
		}
		fill(t, dir, room)
		run := spawn(t, dir, another...)
		refused(t, fmt.Sprintf("%d bytes left", room), run, run.end(t), "no space left on device", want)
		where[strings.Join(strings.Fields(run.messages.String())[:4], " ")] = true
		if err := os.Remove(filepath.Join(dir, "ballast")); err != nil {
			t.Fatal(err)
		}
	}
	if len(where) < 3 {
		t.Errorf("the disk was full at %d places only: %v", len(where), where)
	}
	run := spawn(t, dir, another...)
	if code := run.end(t); code != exitDone {
		t.Fatalf("with room again: code %d:\n%s", code, run.messages.String())
	}
	if left := entries(t, dir); !slices.Equal(left, []string{"quick.yaml", "result", "result.previous"}) {
		t.Errorf("left behind: %q", left)
	}
	if previous, err := readFolder(filepath.Join(dir, "result.previous")); err != nil || string(previous["result.json"]) != string(want["result.json"]) {
		t.Errorf("the last result was not kept: %v", err)
	}
}

// fill leaves so many bytes free in the file system of dir.
func fill(t *testing.T, dir string, room int) {
	t.Helper()
	var stat syscall.Statfs_t
	if err := syscall.Statfs(dir, &stat); err != nil {
		t.Fatal(err)
	}
	ballast := max(0, int(stat.Bavail)*int(stat.Bsize)-room)
	if err := os.WriteFile(filepath.Join(dir, "ballast"), make([]byte, ballast), 0o600); err != nil {
		t.Fatal(err)
	}
}

// fileSizeLimit checks the same by a limit on the size of files, which every user
// may set: in a shell that becomes the program, because the test runner goes on
// writing files of its own.
func fileSizeLimit(t *testing.T) {
	dir := t.TempDir()
	want := diskFolder(t, dir)
	for _, blocks := range []int{2, 40} { // of 512 bytes, or 1024 in some shells
		run := spawnBy(t, dir, []string{"sh", "-c", fmt.Sprintf(`ulimit -f %d && exec "$0" "$@"`, blocks), os.Args[0]},
			append(slices.Clone(diskStudy), "--capture-height-m", "0.3")...)
		refused(t, fmt.Sprintf("files of %d blocks", blocks), run, run.end(t), "file too large", want)
	}
}

// A disk that can only be read ends a run with code 1 before it searches.
func TestReadOnlyFolder(t *testing.T) {
	dir := mountSmall(t, 1<<20)
	mounted := dir != ""
	if !mounted {
		dir = t.TempDir()
	}
	want := diskFolder(t, dir)
	switch {
	case mounted:
		if err := syscall.Mount("", dir, "", syscall.MS_REMOUNT|syscall.MS_RDONLY, ""); err != nil {
			t.Fatal(err)
		}
		run := spawn(t, dir, diskStudy...)
		refused(t, "mounted read-only", run, run.end(t), "read-only file system", want)
	case os.Geteuid() != 0: // no right stops root
		if err := os.Chmod(dir, 0o500); err != nil {
			t.Fatal(err)
		}
		run := spawn(t, dir, diskStudy...)
		refused(t, "no right to write", run, run.end(t), "permission denied", want)
		if err := os.Chmod(dir, 0o700); err != nil {
			t.Fatal(err)
		}
	}
	run := spawn(t, dir, "design", "quick.yaml", "-o", "quick.yaml/result", "--quiet")
	refused(t, "a file as a folder", run, run.end(t), "not a directory", want)
}
