package chart

import (
	"bytes"
	_ "embed"
	"encoding/base64"
	"fmt"
	"io"
)

// Family is the face of the drawings: the letters that text is measured with,
// under a name no installed font has.
const Family = "Rampwright Sans"

// lettering are the attributes of a drawing that all its text inherits: for a reader
// without the face others of the same widths, then whatever there is; and widths
// that a screen does not round to whole points.
const lettering = `font-family="` + Family + `, Liberation Sans, Arial, Helvetica, sans-serif" text-rendering="geometricPrecision"`

// The faces are subsets of Liberation Sans, under the licence in face/OFL.txt.
// `go test -run Face -update-faces` makes them and a test compares them with their
// source; they are kept as files, so that their bytes depend on no release of a
// compressor.
//
//go:embed face/regular.woff
var regularFace []byte

//go:embed face/bold.woff
var boldFace []byte

// FaceStyle is the style sheet of a page that shows drawings: both faces, once.
func FaceStyle() string { return fontFace(regularFace, 400) + fontFace(boldFace, 700) }

func fontFace(woff []byte, weight int) string {
	return fmt.Sprintf("@font-face{font-family:%q;font-weight:%d;src:url(data:font/woff;base64,%s) format(\"woff\")}\n",
		Family, weight, base64.StdEncoding.EncodeToString(woff))
}

// A drawing ends with a style sheet where it carries its face.
const (
	openStyle  = "<style>"
	closeStyle = "</style></svg>\n"
	closeSheet = "</svg>\n"
)

// Alone draws a file that stands by itself: with the face of its text, which is
// regular throughout. What a Write function draws is without, for a page that has
// FaceStyle. It returns the error of the drawing.
func Alone(write func(io.Writer) error) ([]byte, error) {
	var sheet bytes.Buffer
	if err := write(&sheet); err != nil {
		return nil, err
	}
	drawing := bytes.TrimSuffix(sheet.Bytes(), []byte(closeSheet))
	return append(drawing, openStyle+fontFace(regularFace, 400)+closeStyle...), nil
}

// Bare is what Alone drew without its face, for a page that has FaceStyle; any other
// drawing as it is.
func Bare(drawing []byte) []byte {
	if end, ok := bytes.CutSuffix(drawing, []byte(closeStyle)); ok {
		if at := bytes.LastIndex(end, []byte(openStyle)); at >= 0 {
			return append(end[:at:at], closeSheet...)
		}
	}
	return drawing
}
