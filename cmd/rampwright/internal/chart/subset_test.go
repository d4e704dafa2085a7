package chart

import (
	"encoding/binary"
	"fmt"
	"slices"
	"unicode/utf16"

	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

// Tables of a TrueType file and their fields are named as in the OpenType
// specification 1.9; all numbers in it are big-endian.
var be = binary.BigEndian

// trueType is the tables of a TrueType file by tag.
type trueType map[string][]byte

// readTables splits a TrueType file into its tables.
func readTables(file []byte) trueType {
	tables := trueType{}
	for i := range int(be.Uint16(file[4:])) {
		record := file[12+16*i:]
		start, length := be.Uint32(record[8:]), be.Uint32(record[12:])
		tables[string(record[:4])] = file[start : start+length]
	}
	return tables
}

// tags lists the tables in the order of a file.
func (t trueType) tags() []string {
	var list []string
	for tag := range t {
		list = append(list, tag)
	}
	slices.Sort(list)
	return list
}

// faceNames are the entries of a name table that a licence or a reader needs.
type faceNames struct{ family, style string }

// subset keeps of a TrueType face the glyphs of some characters, their widths and
// their kerning as x/image/font/sfnt reads it, and drops the hints.
func subset(file []byte, characters []rune, names faceNames) (trueType, error) {
	source, err := sfnt.Parse(file)
	if err != nil {
		return nil, err
	}
	old := readTables(file)
	s := subsetter{source: source, old: old, at: map[sfnt.GlyphIndex]int{}, glyphOf: map[rune]int{}}
	s.take(0)
	for _, r := range characters {
		glyph, err := source.GlyphIndex(&s.buffer, r)
		if err != nil {
			return nil, err
		}
		if glyph == 0 {
			return nil, fmt.Errorf("the face has no glyph of %q", r)
		}
		s.glyphOf[r] = s.take(glyph)
	}
	drawn := len(s.glyphs) // those that text can name
	made := trueType{}
	made["glyf"], made["loca"] = s.outlines()
	made["hmtx"] = s.widths()
	made["head"] = changed(old["head"], func(b []byte) {
		be.PutUint32(b[8:], 0)                        // checksumAdjustment, set with the file
		be.PutUint16(b[16:], be.Uint16(b[16:])&^0x1c) // flags of hints
		be.PutUint16(b[50:], 0)                       // indexToLocFormat: short
	})
	made["hhea"] = changed(old["hhea"], func(b []byte) { be.PutUint16(b[34:], uint16(len(s.glyphs))) })
	made["maxp"] = changed(old["maxp"], func(b []byte) {
		be.PutUint16(b[4:], uint16(len(s.glyphs)))
		be.PutUint16(b[14:], 1) // maxZones: no twilight zone
		clear(b[16:28])         // maxTwilightPoints .. maxSizeOfInstructions
	})
	made["post"] = changed(old["post"][:32], func(b []byte) { be.PutUint32(b, 0x00030000) }) // no glyph names
	made["cmap"] = characterMap(s.glyphOf)
	made["OS/2"] = changed(old["OS/2"], func(b []byte) {
		clear(b[42:58])
		be.PutUint32(b[42:], 1<<0|1<<1|1<<7|1<<31) // Basic Latin, Latin-1, Greek, General Punctuation
		be.PutUint32(b[46:], 1<<(38-32))           // Mathematical Operators
		be.PutUint16(b[64:], uint16(slices.Min(characters)))
		be.PutUint16(b[66:], uint16(slices.Max(characters)))
	})
	made["kern"], err = s.kerning(drawn)
	if err != nil {
		return nil, err
	}
	made["name"], err = s.names(names)
	return made, err
}

type subsetter struct {
	source  *sfnt.Font
	buffer  sfnt.Buffer
	old     trueType
	glyphs  []sfnt.GlyphIndex       // of the source, in the order of the subset
	at      map[sfnt.GlyphIndex]int // place of a glyph in the subset
	glyphOf map[rune]int
}

// take gives a glyph its place in the subset.
func (s *subsetter) take(glyph sfnt.GlyphIndex) int {
	place, taken := s.at[glyph]
	if !taken {
		place = len(s.glyphs)
		s.at[glyph], s.glyphs = place, append(s.glyphs, glyph)
	}
	return place
}

// outlines copies glyphs without their hints, and those they are composed of.
func (s *subsetter) outlines() (glyf, loca []byte) {
	loca = be.AppendUint16(nil, 0)
	for i := 0; i < len(s.glyphs); i++ { // components are added on the way
		outline := s.outline(s.glyphs[i])
		switch {
		case len(outline) == 0: // a blank
		case int16(be.Uint16(outline)) >= 0:
			outline = withoutHints(outline)
		default:
			outline = s.composite(outline)
		}
		glyf = append(glyf, outline...)
		if len(glyf)%2 == 1 {
			glyf = append(glyf, 0)
		}
		loca = be.AppendUint16(loca, uint16(len(glyf)/2))
	}
	return glyf, loca
}

// outline is a glyph as the source has it, of which loca tells the place.
func (s *subsetter) outline(glyph sfnt.GlyphIndex) []byte {
	i, loca := int(glyph), s.old["loca"]
	if be.Uint16(s.old["head"][50:]) == 0 { // indexToLocFormat
		return s.old["glyf"][2*int(be.Uint16(loca[2*i:])) : 2*int(be.Uint16(loca[2*i+2:]))]
	}
	return s.old["glyf"][be.Uint32(loca[4*i:]):be.Uint32(loca[4*i+4:])]
}

// withoutHints is a simple glyph: header of 10 bytes, ends of contours,
// instructions with their length, flags and coordinates.
func withoutHints(outline []byte) []byte {
	hints := 10 + 2*int(be.Uint16(outline))
	short := append(slices.Clone(outline[:hints]), 0, 0)
	return append(short, outline[hints+2+int(be.Uint16(outline[hints:])):]...)
}

// Flags of a component of a composite glyph.
const (
	wordArguments  = 0x0001
	oneScale       = 0x0008
	moreComponents = 0x0020
	twoScales      = 0x0040
	twoByTwo       = 0x0080
	haveHints      = 0x0100
)

// composite names the components by their places in the subset.
func (s *subsetter) composite(outline []byte) []byte {
	short := slices.Clone(outline)
	for at := 10; ; {
		flags := be.Uint16(short[at:])
		be.PutUint16(short[at:], flags&^haveHints)
		be.PutUint16(short[at+2:], uint16(s.take(sfnt.GlyphIndex(be.Uint16(short[at+2:])))))
		at += 6
		if flags&wordArguments != 0 {
			at += 2
		}
		switch {
		case flags&oneScale != 0:
			at += 2
		case flags&twoScales != 0:
			at += 4
		case flags&twoByTwo != 0:
			at += 8
		}
		if flags&moreComponents == 0 {
			return short[:at]
		}
	}
}

// widths gives every glyph its advance and left side bearing.
func (s *subsetter) widths() []byte {
	var hmtx []byte
	old, long := s.old["hmtx"], int(be.Uint16(s.old["hhea"][34:])) // numberOfHMetrics
	for _, glyph := range s.glyphs {
		advance := 4 * min(int(glyph), long-1)
		bearing := advance + 2
		if int(glyph) >= long { // bearings alone follow, of glyphs as wide as the last
			bearing = 4*long + 2*(int(glyph)-long)
		}
		hmtx = append(append(hmtx, old[advance:advance+2]...), old[bearing:bearing+2]...)
	}
	return hmtx
}

// kerning lists the pairs that stand closer or wider, in a subtable of format 0.
func (s *subsetter) kerning(drawn int) ([]byte, error) {
	em := fixed.Int26_6(s.source.UnitsPerEm())
	var pairs []byte
	count := 0
	for left, a := range s.glyphs[:drawn] {
		for right, b := range s.glyphs[:drawn] {
			by, err := s.source.Kern(&s.buffer, a, b, em, font.HintingNone)
			if err != nil && err != sfnt.ErrNotFound {
				return nil, err
			}
			if err == nil && by != 0 && left > 0 && right > 0 {
				pairs = be.AppendUint16(be.AppendUint16(be.AppendUint16(pairs, uint16(left)), uint16(right)), uint16(by))
				count++
			}
		}
	}
	kern := appendWords(nil, 0, 1)                             // version, number of subtables
	kern = appendWords(kern, 0, uint16(14+len(pairs)), 0x0001) // version, length, horizontal
	return append(appendWords(kern, searchWords(count, 6)...), pairs...), nil
}

// searchWords are count, searchRange, entrySelector and rangeShift of a list that
// is searched by halves.
func searchWords(count, size int) []uint16 {
	power, exponent := 1, 0
	for 2*power <= count {
		power, exponent = 2*power, exponent+1
	}
	return []uint16{uint16(count), uint16(power * size), uint16(exponent), uint16((count - power) * size)}
}

// characterMap is a cmap of format 4, for Unicode's first plane.
func characterMap(glyphOf map[rune]int) []byte {
	type segment struct{ first, last, glyph int }
	var runs []segment
	var characters []rune
	for r := range glyphOf {
		characters = append(characters, r)
	}
	slices.Sort(characters)
	for _, r := range characters {
		c, glyph := int(r), glyphOf[r]
		if n := len(runs) - 1; n >= 0 && runs[n].last+1 == c && runs[n].glyph+c-runs[n].first == glyph {
			runs[n].last = c
		} else {
			runs = append(runs, segment{c, c, glyph})
		}
	}
	runs = append(runs, segment{0xffff, 0xffff, 0})
	var first, last, delta []uint16
	for _, run := range runs {
		first, last = append(first, uint16(run.first)), append(last, uint16(run.last))
		delta = append(delta, uint16(run.glyph-run.first))
	}
	search := searchWords(len(runs), 2)
	search[0] *= 2 // segCountX2
	table := appendWords(nil, 4, uint16(16+8*len(runs)), 0)
	table = appendWords(table, search...)
	table = appendWords(appendWords(table, last...), 0)
	table = appendWords(appendWords(table, first...), delta...)
	table = appendWords(table, make([]uint16, len(runs))...) // idRangeOffset
	return append(be.AppendUint32(appendWords(nil, 0, 1, 3, 1), 12), table...)
}

// Names by their numbers.
const (
	copyrightName  = 0
	familyName     = 1
	styleName      = 2
	uniqueName     = 3
	fullName       = 4
	versionName    = 5
	postScriptName = 6
	licenceName    = 13
	licencePlace   = 14
)

// names keeps the notice and the licence and puts a name of our own in place of
// the one the licence reserves (SIL OFL 1.1, condition 3).
func (s *subsetter) names(face faceNames) ([]byte, error) {
	kept := func(id sfnt.NameID) string {
		text, err := s.source.Name(&s.buffer, id)
		if err != nil {
			return ""
		}
		return text
	}
	full := face.family + " " + face.style
	list := map[uint16]string{
		copyrightName: kept(sfnt.NameIDCopyright), familyName: face.family, styleName: face.style, uniqueName: full + " 1", fullName: full,
		versionName:    "Version 1; some glyphs of a face under the SIL Open Font License, without hints",
		postScriptName: postScript(face), licenceName: kept(sfnt.NameIDLicense), licencePlace: kept(sfnt.NameIDLicenseURL),
	}
	for _, id := range []uint16{copyrightName, licenceName, licencePlace} {
		if list[id] == "" {
			return nil, fmt.Errorf("the face has no name %d", id)
		}
	}
	var ids []uint16
	for id := range list {
		ids = append(ids, id)
	}
	slices.Sort(ids)
	table := appendWords(nil, 0, uint16(len(ids)), uint16(6+12*len(ids)))
	var text []byte
	for _, id := range ids {
		words := utf16.Encode([]rune(list[id]))
		table = appendWords(table, 3, 1, 0x409, id, uint16(2*len(words)), uint16(len(text)))
		text = appendWords(text, words...)
	}
	return append(table, text...), nil
}

func postScript(face faceNames) string {
	letters := slices.DeleteFunc([]rune(face.family+"-"+face.style), func(r rune) bool { return r == ' ' })
	return string(letters)
}

func changed(table []byte, by func([]byte)) []byte {
	b := slices.Clone(table)
	by(b)
	return b
}

func appendWords(b []byte, words ...uint16) []byte {
	for _, w := range words {
		b = be.AppendUint16(b, w)
	}
	return b
}

// file joins the tables and sums them up, as head asks for.
func (t trueType) file() []byte {
	tags := t.tags()
	head := append(be.AppendUint32(nil, 0x00010000), appendWords(nil, searchWords(len(tags), 16)...)...)
	at := len(head) + 16*len(tags)
	var body []byte
	adjustment := 0
	for _, tag := range tags {
		if tag == "head" {
			adjustment = at + len(body) + 8
		}
		head = append(head, tag...)
		head = be.AppendUint32(head, t.checksum(tag))
		head = be.AppendUint32(head, uint32(at+len(body)))
		head = be.AppendUint32(head, uint32(len(t[tag])))
		body = padded(append(body, t[tag]...))
	}
	file := append(head, body...)
	be.PutUint32(file[adjustment:], 0)
	be.PutUint32(file[adjustment:], 0xb1b0afba-checksum(file))
	return file
}

// checksum is that of a table; head's leaves out what adjusts the file's.
func (t trueType) checksum(tag string) uint32 {
	table := slices.Clone(t[tag])
	if tag == "head" {
		clear(table[8:12])
	}
	return checksum(table)
}

// checksum adds the words of a table, the last one filled with zeros.
func checksum(table []byte) uint32 {
	var sum uint32
	for table := padded(slices.Clone(table)); len(table) > 0; table = table[4:] {
		sum += be.Uint32(table)
	}
	return sum
}

func padded(b []byte) []byte { return append(b, make([]byte, (4-len(b)%4)%4)...) }
