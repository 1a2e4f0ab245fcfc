package config

import (
	"fmt"
	"os"
	"reflect"
)

// layoutVersion is the value of the key kindwell that this version reads.
const layoutVersion = "1"

// Load reads a study file. The error is Faults when the file could be read
// but is not right, and the error of the operating system otherwise.
func Load(path string) (*Study, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("study file: %w", err)
	}
	return Parse(path, data)
}

// Parse reads a study file that is in memory. Name is shown in faults, and
// its folder is the one that files in the study are relative to. The study is
// returned only without faults; the error is Faults otherwise.
func Parse(name string, data []byte) (*Study, error) {
	study, faults := parse(name, data, false)
	if err := faults.Err(); err != nil {
		return nil, err
	}
	return study, nil
}

// parse does the work of Parse. Everything takes keys and words of later
// versions too.
func parse(name string, data []byte, everything bool) (*Study, Faults) {
	src, root, faults := read(name, data)
	if root == nil {
		return nil, faults
	}
	if fault, ok := otherLayout(src, root); ok {
		return nil, Faults{fault}
	}
	study := &Study{source: src}
	d := &decoder{src: src, faults: faults, bad: map[string]bool{}, everything: everything}
	d.section(root, reflect.ValueOf(study).Elem(), "")
	fill(study)
	c := checker{Study: study, decoder: d}
	c.check()
	return study, d.faults
}

// otherLayout reports a study file of a layout that this version does not
// know; nothing else in such a file can be judged.
func otherLayout(src *source, root *node) (Fault, bool) {
	for _, key := range root.keys {
		n := key.value
		if key.name != "kindwell" || n.kind != isScalar || n.quoted || !plainWhole.MatchString(n.text) || n.text == layoutVersion {
			continue
		}
		return Fault{
			Position: src.position(n.place),
			Message:  fmt.Sprintf("layout %s of study files is not known to this version, which reads layout %s", shorten(n.text), layoutVersion),
			Advice:   "use the version of kindwell that the file was written for, or write `kindwell: " + layoutVersion + "` and check every key",
		}, true
	}
	return Fault{}, false
}

// fill completes defaults that follow from other keys.
func fill(s *Study) {
	if m := s.Measures; m != nil && len(m.Sets) == 0 {
		m.Sets = Sets{{Name: "everything", Patterns: []string{"*"}}}
	}
	if p := s.Predict; p != nil {
		if len(p.Sets) == 0 && s.Measures != nil {
			p.Sets = s.Measures.Sets.Names()
		}
		if p.Metric == "" {
			p.Metric = MetricRByFold
			if p.Outer.LeaveOut != "" {
				p.Metric = MetricR2
			}
		}
	}
	if h := s.Heritability; h != nil {
		if len(h.Of) == 0 {
			if s.Measures != nil {
				h.Of = append(h.Of, RoleMeasures)
			}
			if s.Traits != nil {
				h.Of = append(h.Of, RoleTraits)
			}
		}
		if len(h.Models) == 0 {
			for _, c := range Model("").Choices() {
				h.Models = append(h.Models, Model(c.Name))
			}
		}
		if !s.Given("heritability.covariates") {
			h.Covariates = append(h.Covariates, s.Confounds.Use...)
		}
	}
}
