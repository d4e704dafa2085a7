// Package chart draws: plain numbers in, a drawing out. It knows no inlet, no
// flow and no file; what is drawn is what the caller hands over.
//
// Drawings are SVG without script, style sheet or outside reference, so that
// they stand alone as a file and inside a page, and they describe themselves:
// a reader recovers every drawn coordinate from the numbers in the file.
package chart
