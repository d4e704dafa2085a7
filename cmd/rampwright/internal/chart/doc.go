// Package chart draws: plain numbers in, a drawing out. It knows no inlet, no
// flow and no file; what is drawn is what the caller hands over.
//
// Drawings are SVG without script, style sheet or outside reference, and they
// describe themselves: a reader recovers every drawn coordinate from the numbers in
// the file. Their text is measured in one face, which a page has once (FaceStyle)
// and a file of its own carries (Alone).
package chart
