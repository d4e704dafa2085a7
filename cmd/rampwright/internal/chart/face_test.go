package chart

import (
	"bytes"
	"compress/zlib"
	"flag"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"codeberg.org/go-fonts/liberation/liberationsansbold"
	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

var updateFaces = flag.Bool("update-faces", false, "make the embedded faces anew")

// repertoire is what the faces can write: ASCII, Latin-1, Greek, and the signs of
// print and arithmetic. Other characters of a title are for the fonts of the
// reader's machine.
func repertoire() []rune {
	var list []rune
	for _, span := range [][2]rune{{0x20, 0x7e}, {0xa0, 0xff}, {0x391, 0x3a1}, {0x3a3, 0x3a9}, {0x3b1, 0x3c9}} {
		for r := span[0]; r <= span[1]; r++ {
			list = append(list, r)
		}
	}
	return append(list, []rune("–—‘’“”•…′″−∂∆∏∑√∞∫≈≠≤≥←↑→↓")...)
}

// faces are the embedded files with what they are made from.
var faces = []struct {
	file   string
	woff   []byte
	source []byte
	names  faceNames
}{
	{"regular.woff", regularFace, liberationsansregular.TTF, faceNames{Family, "Regular"}},
	{"bold.woff", boldFace, liberationsansbold.TTF, faceNames{Family, "Bold"}},
}

// The embedded faces are what their source gives, table by table: the compressed
// bytes may differ with the compressor.
func TestFacesAreAsMade(t *testing.T) {
	for _, f := range faces {
		made, err := subset(f.source, repertoire(), f.names)
		if err != nil {
			t.Fatal(err)
		}
		if *updateFaces {
			if err := os.WriteFile(filepath.Join("face", f.file), woff(made), 0o644); err != nil {
				t.Fatal(err)
			}
			continue
		}
		tables := unpack(t, f.woff)
		if got, want := tables.tags(), made.tags(); !slices.Equal(got, want) {
			t.Errorf("%s has tables %q, want %q", f.file, got, want)
		}
		for tag, want := range readTables(made.file()) {
			if !bytes.Equal(tables[tag], want) {
				t.Errorf("%s: table %s is not as made", f.file, tag)
			}
		}
	}
}

// woff compresses the tables of a face: WOFF 1.0 (W3C Recommendation, 2012),
// sections 3 to 5.
func woff(t trueType) []byte {
	plain := t.file()
	tags, tables := t.tags(), readTables(plain)
	directory, body := []byte(nil), []byte(nil)
	start := 44 + 20*len(tags)
	for _, tag := range tags {
		data := tables[tag]
		var small bytes.Buffer
		z, err := zlib.NewWriterLevel(&small, zlib.BestCompression)
		if err != nil { // the level is a constant
			panic(err)
		}
		_, _ = z.Write(data) // a Buffer never fails
		_ = z.Close()
		stored := small.Bytes()
		if len(stored) >= len(data) {
			stored = data
		}
		directory = append(directory, tag...)
		for _, v := range []uint32{uint32(start + len(body)), uint32(len(stored)), uint32(len(data)), t.checksum(tag)} {
			directory = be.AppendUint32(directory, v)
		}
		body = padded(append(body, stored...))
	}
	head := append([]byte("wOFF"), 0, 1, 0, 0) // TrueType outlines
	head = be.AppendUint32(head, uint32(start+len(body)))
	head = appendWords(head, uint16(len(tags)), 0)
	head = be.AppendUint32(head, uint32(len(plain)))
	head = appendWords(head, 1, 0)           // version of the face
	head = append(head, make([]byte, 20)...) // no metadata, no private data
	return slices.Concat(head, directory, body)
}

// unpack reads a WOFF file.
func unpack(t *testing.T, file []byte) trueType {
	t.Helper()
	if len(file) < 44 || string(file[:4]) != "wOFF" || int(be.Uint32(file[8:])) != len(file) {
		t.Fatalf("no WOFF file: %q", file[:min(12, len(file))])
	}
	tables := trueType{}
	for i := range int(be.Uint16(file[12:])) {
		entry := file[44+20*i:]
		start, stored, length := be.Uint32(entry[4:]), be.Uint32(entry[8:]), be.Uint32(entry[12:])
		data := file[start : start+stored]
		if stored < length {
			z, err := zlib.NewReader(bytes.NewReader(data))
			if err != nil {
				t.Fatal(err)
			}
			if data, err = io.ReadAll(z); err != nil {
				t.Fatal(err)
			}
		}
		if len(data) != int(length) {
			t.Fatalf("table %s has %d bytes, says %d", entry[:4], len(data), length)
		}
		tag := string(entry[:4])
		tables[tag] = data
		if sum := tables.checksum(tag); sum != be.Uint32(entry[16:]) {
			t.Errorf("table %s sums to %x, says %x", tag, sum, be.Uint32(entry[16:]))
		}
	}
	if sum := checksum(tables.file()); sum != 0xb1b0afba || !bytes.Equal(readTables(tables.file())["head"], tables["head"]) {
		t.Errorf("the file sums to %x (OpenType 1.9, table head)", sum)
	}
	return tables
}

// A face draws each character as its source does: the same outline, width and
// kerning, read by x/image/font/sfnt, which made none of it.
func TestFacesDrawAsTheirSource(t *testing.T) {
	for _, f := range faces {
		source, face := parsed(t, f.source), parsed(t, unpack(t, f.woff).file())
		em := fixed.Int26_6(source.UnitsPerEm())
		var one, other sfnt.Buffer
		for _, r := range repertoire() {
			a, b := glyph(t, source, r), glyph(t, face, r)
			if b == 0 {
				t.Errorf("%s has no %q", f.file, r)
				continue
			}
			want, err := source.LoadGlyph(&one, a, em, nil)
			if err != nil {
				t.Fatal(err)
			}
			got, err := face.LoadGlyph(&other, b, em, nil)
			if err != nil {
				t.Fatalf("%q: %v", r, err)
			}
			if !slices.Equal(got, want) {
				t.Errorf("%s draws %q otherwise", f.file, r)
			}
			if got, want := advance(t, face, b), advance(t, source, a); got != want {
				t.Errorf("%s sets %q %v wide, its source %v", f.file, r, got, want)
			}
			for _, left := range "AFLTVYWPrvy1." {
				got, want := kern(face, glyph(t, face, left), b), kern(source, glyph(t, source, left), a)
				if got != want {
					t.Errorf("%s kerns %q after %q by %v, its source by %v", f.file, r, left, got, want)
				}
			}
		}
		if kern(face, glyph(t, face, 'A'), glyph(t, face, 'V')) >= 0 {
			t.Errorf("%s does not kern AV", f.file)
		}
	}
}

func parsed(t *testing.T, file []byte) *sfnt.Font {
	t.Helper()
	face, err := sfnt.Parse(file)
	if err != nil {
		t.Fatal(err)
	}
	return face
}

func glyph(t *testing.T, face *sfnt.Font, r rune) sfnt.GlyphIndex {
	t.Helper()
	index, err := face.GlyphIndex(nil, r)
	if err != nil {
		t.Fatal(err)
	}
	return index
}

func advance(t *testing.T, face *sfnt.Font, glyph sfnt.GlyphIndex) fixed.Int26_6 {
	t.Helper()
	width, err := face.GlyphAdvance(nil, glyph, fixed.Int26_6(face.UnitsPerEm()), font.HintingNone)
	if err != nil {
		t.Fatal(err)
	}
	return width
}

// kern is 0 for a pair the face does not list.
func kern(face *sfnt.Font, left, right sfnt.GlyphIndex) fixed.Int26_6 {
	by, err := face.Kern(nil, left, right, fixed.Int26_6(face.UnitsPerEm()), font.HintingNone)
	if err != nil {
		return 0
	}
	return by
}

// A face names itself and keeps the notice and the licence of its source.
func TestFacesNameTheirLicence(t *testing.T) {
	for _, f := range faces {
		face := parsed(t, unpack(t, f.woff).file())
		for id, want := range map[sfnt.NameID]string{
			sfnt.NameIDFamily: Family, sfnt.NameIDFull: Family + " " + f.names.style, sfnt.NameIDCopyright: "Red Hat",
			sfnt.NameIDLicense: "SIL Open Font License", sfnt.NameIDLicenseURL: "OFL",
		} {
			if got, err := face.Name(nil, id); err != nil || !bytes.Contains([]byte(got), []byte(want)) {
				t.Errorf("%s: name %d is %q, %v; want %q in it", f.file, id, got, err, want)
			}
		}
	}
}

// Text in letters that the face lacks has a width as well.
func TestMissingLettersHaveWidth(t *testing.T) {
	face := newTypeface(10)
	for _, text := range []string{"進気口", "Воздухозаборник", "🚀"} {
		if w := face.width(text) / float64(len([]rune(text))); !(w > 3 && w < 12) || math.IsNaN(w) {
			t.Errorf("%q is %g a letter in a face of 10", text, w)
		}
	}
}
