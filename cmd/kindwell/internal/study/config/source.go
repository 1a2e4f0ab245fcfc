package config

import (
	"path/filepath"
	"strings"
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/width"
)

// source remembers where everything in a study file stands.
type source struct {
	file   string
	lines  []string
	ends   []int            // column after the last character of each line
	places map[string]place // by path: predict.outer.folds, traits.use[2]
}

// place is a line and column, both from 1.
type place struct{ line, column int }

func newSource(file, text string) *source {
	s := &source{file: file, lines: strings.Split(text, "\n"), places: map[string]place{}}
	s.ends = make([]int, len(s.lines))
	for i, line := range s.lines {
		s.ends[i] = utf8.RuneCountInString(line) + 1
	}
	return s
}

// position completes a place. Places outside the file, which a syntax fault
// at its end may have, are moved to its nearest line.
func (s *source) position(p place) Position {
	p.line = min(max(p.line, 1), len(s.lines))
	p.column = min(max(p.column, 1), s.ends[p.line-1])
	return Position{File: s.file, Line: p.line, Column: p.column, Source: s.lines[p.line-1]}
}

// At says where a key or a list element stands in the study file. Paths are
// written predict.outer.folds, traits.use[2], measures.sets.occupancy[0],
// with list elements counted from 0. A key that is not in the file has the
// place of the section that it would be in. For a Study that was not read
// from a file the position is empty.
func (s *Study) At(path string) Position {
	if s.source == nil {
		return Position{}
	}
	for path != "" {
		if p, ok := s.source.places[path]; ok {
			return s.source.position(p)
		}
		path = path[:max(0, strings.LastIndexAny(path, ".["))]
	}
	return s.source.position(s.source.places[""])
}

// Given says whether the file itself holds the key or list element of this
// path, so that its value is no default.
func (s *Study) Given(path string) bool {
	if s.source == nil {
		return false
	}
	_, ok := s.source.places[path]
	return ok
}

// Path returns where a file that the study names lies: names that are not
// absolute are relative to the folder of the study file.
func (s *Study) Path(file string) string {
	if s.source == nil || filepath.IsAbs(file) {
		return filepath.Clean(file)
	}
	return filepath.Join(filepath.Dir(s.source.file), file)
}

// excerptWidth is the number of characters of a long line that are shown.
const excerptWidth = 100

// excerpt returns the part of a line around a column (from 1, in characters)
// and a line with a marker below that column. Tabs stay tabs in both, so that
// the marker stands right wherever they stop.
func excerpt(line string, column int) (shown, marker string) {
	runes := []rune(line)
	at := min(max(column-1, 0), len(runes))
	from, to := 0, len(runes)
	if len(runes) > excerptWidth {
		from = min(max(0, at-excerptWidth/2), len(runes)-excerptWidth)
		to = from + excerptWidth
	}
	var text, under strings.Builder
	if from > 0 {
		text.WriteString("...")
		under.WriteString("   ")
	}
	for i := from; i < to; i++ {
		r := runes[i]
		if r != '\t' && !unicode.IsPrint(r) {
			r = unicode.ReplacementChar
		}
		text.WriteRune(r)
		if i < at {
			under.WriteString(blank(r))
		}
	}
	if to < len(runes) {
		text.WriteString("...")
	}
	return text.String(), under.String() + "^"
}

// blank returns white space as wide as a character.
func blank(r rune) string {
	switch {
	case r == '\t':
		return "\t"
	case unicode.In(r, unicode.Mn, unicode.Me):
		return ""
	}
	switch width.LookupRune(r).Kind() {
	case width.EastAsianWide, width.EastAsianFullwidth:
		return "  "
	}
	return " "
}
