package study

import (
	"errors"
	"fmt"
	"strings"

	"kindwell/cmd/kindwell/internal/cohort"
	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/features"
	"kindwell/internal/names"
)

// faults gathers what is wrong with a study once its tables are read: names
// that mean nothing, and cells that a scale refuses.
type faults struct {
	names config.Faults
	cells []*cohort.Fault
}

// study adds a fault at a place of the study file.
func (f *faults) study(s *config.Study, path, message, advice string) {
	f.names.Add(s.At(path), message, advice)
}

// name adds a fault about a name that matches none of the candidates.
func (f *faults) name(s *config.Study, path, message, name string, candidates []string) {
	advice := "there are none"
	if near := names.Nearest(name, candidates); near != "" {
		advice = fmt.Sprintf("did you mean %q?", near)
	} else if len(candidates) > 0 {
		advice = "there are " + strings.Join(shorten(candidates, 12), ", ")
	}
	f.study(s, path, message, advice)
}

// cell adds a value of a measure that its scale refuses.
func (f *faults) cell(m *cohort.Measures, measure int, e features.CellError, scale string) {
	fault := m.Fault(e.Row, measure, "%s: %s", scale, e.Reason)
	if e.Column == features.WholeRow {
		fault.Column, fault.Value = "", ""
	}
	f.cells = append(f.cells, fault)
}

// err is nil when there is no fault.
func (f *faults) err() error {
	var all []error
	if err := f.names.Err(); err != nil {
		all = append(all, err)
	}
	if len(f.cells) > 0 {
		all = append(all, &cohort.Faults{List: f.cells})
	}
	return errors.Join(all...)
}

// shorten keeps the first names of a list and says how many more there are.
func shorten(names []string, most int) []string {
	if len(names) <= most {
		return names
	}
	return append(append([]string(nil), names[:most]...), fmt.Sprintf("and %d more", len(names)-most))
}

// plain takes the name of a package off the front of an error's text, which
// is for programmers and means nothing to an analyst.
func plain(err error) string {
	text := err.Error()
	for _, name := range []string{"features: ", "crossval: ", "predict: ", "twin: "} {
		text = strings.TrimPrefix(text, name)
	}
	return text
}
