// Package typeset lays out single lines of text, with the subscripts, italics and bars that labels of crystals need, in
// the project's own fonts.
//
// Units: points, y down, origin at the left end of the baseline; outlines in units of the em. The fonts are Inter
// (regular, italic, bold and bold italic) and, for signs it lacks, DejaVu Sans; both are embedded by package assets.
// Advances and kerning are the fonts' own (OpenType hmtx, GPOS and kern), except that the digits 0–9 all get the width of
// the widest, so that columns of figures stand under one another.
//
// Markup: _{lower} ^{upper} *italic* **bold** \overline{barred}, nested as needed; _{…}^{…} next to each other stand
// above one another. A backslash before any of \ _ ^ * { } makes it plain; Escape does that to a whole string, and Plain
// lays out a string without looking for markup. A star after a letter or digit, as in sp³s*, starts nothing. What is not
// well-formed is printed as it stands; Check says what is wrong with it.
//
// Memory: a laid-out Text is shared by all who ask for the same one and must not be changed; so are outlines. All
// functions may be called by any number of goroutines.
//
// Panics: only if the embedded font files are damaged.
package typeset
