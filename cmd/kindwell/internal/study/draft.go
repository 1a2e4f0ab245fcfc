package study

import (
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"kindwell/cmd/kindwell/internal/cohort"
)

// Drafted is a study file written by Draft.
type Drafted struct {
	Path string
	// Notes say what was found and guessed, a line each.
	Notes []string
	// Trouble is what is wrong with the tables, nil when the study runs.
	Trouble error
}

// draftName is the file that Draft writes.
const draftName = "study.yaml"

// Draft looks at the tables in a folder, guesses which holds the people, which
// the measures and which the traits, and writes a commented study file. A
// file that is there already is refused. The file is read back and its tables
// with it.
func Draft(dir string) (*Drafted, error) {
	path := filepath.Join(dir, draftName)
	if _, err := os.Lstat(path); err == nil {
		return nil, fmt.Errorf("%s exists already; move it away to have a new one written", path)
	}
	tables, err := lookAround(dir)
	if err != nil {
		return nil, err
	}
	g, err := guess(dir, tables)
	if err != nil {
		return nil, err
	}
	if err := writeWhole(path, g.yaml()); err != nil {
		return nil, err
	}
	d := &Drafted{Path: path, Notes: g.notes}
	d.Notes = append(d.Notes, g.unused()...)
	_, d.Trouble = Open(path)
	return d, nil
}

// writeWhole writes a file that appears whole or not at all.
func writeWhole(path string, data []byte) error {
	temp, err := os.CreateTemp(filepath.Dir(path), ".kindwell-unfinished-*")
	if err != nil {
		return err
	}
	defer os.Remove(temp.Name())
	_, err = temp.Write(data)
	err = errors.Join(err, temp.Sync(), temp.Close(), os.Chmod(temp.Name(), 0o644))
	if err != nil {
		return err
	}
	return os.Rename(temp.Name(), path)
}

// seen is a table that was looked at.
type seen struct {
	file    string
	table   *cohort.Table
	person  string            // its column of persons
	session string            // its column of sessions, or empty
	kin     map[string]string // our names of kinship columns to the file's
}

// synonyms are names under which columns are found, best first.
var synonyms = []struct {
	ours  string
	names []string
}{
	{"person", []string{"person", "participant", "subject", "subj", "sub", "individual", "id"}},
	{"family", []string{"family", "fam", "household"}},
	{"mother", []string{"mother"}},
	{"father", []string{"father"}},
	{"twin_set", []string{"twinset", "twinpair", "twin", "pair"}},
	{"zygosity", []string{"zygosity", "zyg"}},
	{"mz_set", []string{"mzset"}},
	{"reared_in", []string{"rearedin"}},
	{"birth_order", []string{"birthorder"}},
	{"sex", []string{"sex", "gender"}},
	{"age", []string{"age", "ageyears", "ageinyears", "ageyrs", "ageinyrs"}},
	{"session", []string{"session", "ses", "visit", "wave", "occasion"}},
}

// bare is a name in small letters without what stands between its words.
func bare(name string) string {
	return strings.NewReplacer("_", "", "-", "", " ", "", ".", "").Replace(strings.ToLower(name))
}

// find returns the file's name of one of our columns, or nothing.
func find(ours string, names []string) string {
	for _, s := range synonyms {
		if s.ours != ours {
			continue
		}
		for _, candidate := range s.names {
			for _, name := range names {
				if plain := bare(name); plain == candidate || plain == candidate+"id" {
					return name
				}
			}
		}
	}
	return ""
}

// lookAround reads the tables of a folder that have a column of persons.
func lookAround(dir string) ([]seen, error) {
	entries, err := os.ReadDir(dir)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, &cohort.Fault{File: dir, Message: "there is no such folder"}
	}
	if info, statErr := os.Stat(dir); statErr == nil && !info.IsDir() {
		return nil, &cohort.Fault{File: dir, Message: "is no folder; name the folder that holds the tables"}
	}
	if err != nil {
		return nil, err
	}
	var tables []seen
	for _, e := range entries {
		name := strings.TrimSuffix(strings.ToLower(e.Name()), ".gz")
		if e.IsDir() || !strings.HasSuffix(name, ".csv") && !strings.HasSuffix(name, ".tsv") {
			continue
		}
		names, err := cohort.ReadNames(dir, e.Name())
		if err != nil {
			return nil, err
		}
		person := find("person", names)
		if person == "" {
			continue
		}
		s := seen{file: e.Name(), person: person, session: find("session", names), kin: map[string]string{}}
		roles := map[string]cohort.Role{person: cohort.ID}
		for _, ours := range []string{"family", "mother", "father", "twin_set", "zygosity", "mz_set", "reared_in"} {
			if theirs := find(ours, names); theirs != "" {
				s.kin[ours] = theirs
				roles[theirs] = cohort.ID
			}
		}
		if s.session != "" {
			roles[s.session] = cohort.Category
		}
		if s.table, _, err = cohort.ReadTable(dir, e.Name(), cohort.TableOptions{Roles: roles, Other: cohort.Auto}); err != nil {
			return nil, err
		}
		tables = append(tables, s)
	}
	if len(tables) == 0 {
		return nil, &cohort.Fault{File: dir, Message: "holds no CSV or TSV table with a column of persons (person, participant_id, subject or id)"}
	}
	return tables, nil
}

// numbers lists the columns of numbers that are no identifiers and no
// covariates by name.
func (s *seen) numbers() []string {
	var names []string
	for _, name := range s.table.Names() {
		if name != s.person && name != s.session && s.table.Numeric(name) {
			names = append(names, name)
		}
	}
	return names
}

// repeated says whether a person has several rows.
func (s *seen) repeated() bool {
	ids := map[string]bool{}
	for _, id := range s.table.Text(s.person) {
		if ids[id] {
			return true
		}
		ids[id] = true
	}
	return false
}

// measureWords are found in names of measures of dynamics.
var measureWords = []string{"occupancy", "dwell", "interval", "switch", "fano", "stay", "transition", "visits", "share", "fraction", "prevalence", "state", "entropy"}

func looksLikeMeasure(name string) bool {
	name = strings.ToLower(name)
	return slices.ContainsFunc(measureWords, func(w string) bool { return strings.Contains(name, w) })
}

// whole is a composition that was recognised.
type whole struct {
	pattern string
	parts   int
	zeros   float64 // 0: there are none
}

// wholes finds groups of columns, by the part of their name before the first
// or last underscore, that add to one in nearly every row.
func wholes(t *cohort.Table, names []string) []whole {
	var found []whole
	taken := map[string]bool{}
	for _, cut := range []func(string, string) int{strings.Index, strings.LastIndex} {
		groups := map[string][]string{}
		var order []string
		for _, name := range names {
			i := cut(name, "_")
			if i <= 0 || taken[name] {
				continue
			}
			prefix := name[:i+1]
			if groups[prefix] == nil {
				order = append(order, prefix)
			}
			groups[prefix] = append(groups[prefix], name)
		}
		for _, prefix := range order {
			parts := groups[prefix]
			if zeros, ok := addToOne(t, parts); ok {
				found = append(found, whole{pattern: prefix + "*", parts: len(parts), zeros: zeros})
				for _, name := range parts {
					taken[name] = true
				}
			}
		}
	}
	return found
}

// addToOne says whether three or more columns add to 1 (within .02) in 95 % of
// the rows that have them all, and proposes half the least part above zero in
// place of zeros.
func addToOne(t *cohort.Table, parts []string) (zeros float64, ok bool) {
	if len(parts) < 3 {
		return 0, false
	}
	rows, good, least, anyZero := 0, 0, math.Inf(1), false
	columns := make([][]float64, len(parts))
	for j, name := range parts {
		columns[j] = t.Numbers(name)
	}
	for i := range t.Len() {
		sum := 0.0
		for _, c := range columns {
			sum += c[i]
		}
		if math.IsNaN(sum) {
			continue
		}
		rows++
		if math.Abs(sum-1) <= closure {
			good++
		}
		for _, c := range columns {
			switch {
			case c[i] == 0:
				anyZero = true
			case c[i] > 0:
				least = min(least, c[i])
			}
		}
	}
	if rows == 0 || float64(good) < 0.95*float64(rows) {
		return 0, false
	}
	if anyZero {
		zeros = twoDigits(least / 2)
	}
	return zeros, true
}

// twoDigits rounds to two significant digits.
func twoDigits(x float64) float64 {
	unit := math.Pow(10, math.Floor(math.Log10(x))-1)
	return math.Round(x/unit) * unit
}
