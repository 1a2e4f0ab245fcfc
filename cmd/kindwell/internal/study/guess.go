package study

import (
	"encoding/json"
	"fmt"
	"math"
	"regexp"
	"slices"
	"strings"

	"kindwell/cmd/kindwell/internal/cohort"
)

// guessed is what the tables of a folder seem to be.
type guessed struct {
	people    *seen
	measures  *seen
	traits    []*seen
	wholes    []whole
	logs      []string // measures on a positive scale
	confounds []string
	traitList []string
	twins     bool
	families  int
	notes     []string
}

// guess gives every table its role.
func guess(dir string, tables []seen) (*guessed, error) {
	g := &guessed{}
	best := 0
	for i := range tables {
		if n := len(tables[i].kin); n > best {
			best, g.people = n, &tables[i]
		}
	}
	if g.people == nil {
		return nil, &cohort.Fault{File: dir, Message: "no table says who is related to whom: one needs a column family, mother, father or twin_set"}
	}
	g.note("%s holds the people (columns of kinship: %s)", g.people.file, strings.Join(kinColumns(g.people), ", "))
	g.chooseMeasures(tables)
	for i := range tables {
		if t := &tables[i]; t != g.people && t != g.measures && len(t.numbers()) > 0 {
			g.traits = append(g.traits, t)
			for _, name := range t.numbers() {
				if !slices.Contains(g.traitList, name) {
					g.traitList = append(g.traitList, name)
				}
			}
			g.note("%s holds traits: %s", t.file, strings.Join(shorten(t.numbers(), 6), ", "))
		}
	}
	if len(g.traits) == 0 && g.measures == nil {
		return nil, &cohort.Fault{File: dir, Message: "there is a table of people but none of measures or traits"}
	}
	g.chooseConfounds()
	_, g.twins = g.people.kin["zygosity"]
	g.families = countFamilies(g.people)
	return g, nil
}

func (g *guessed) note(format string, args ...any) {
	g.notes = append(g.notes, fmt.Sprintf(format, args...))
}

func kinColumns(s *seen) []string {
	var names []string
	for _, synonym := range synonyms {
		if theirs, ok := s.kin[synonym.ours]; ok {
			names = append(names, theirs)
		}
	}
	return names
}

// chooseMeasures takes the table with most columns that are named like
// measures; without one, a table with several rows a person.
func (g *guessed) chooseMeasures(tables []seen) {
	most := 0
	for i := range tables {
		t := &tables[i]
		if t == g.people {
			continue
		}
		like := 0
		for _, name := range t.numbers() {
			if looksLikeMeasure(name) {
				like += 2
			}
		}
		if like == 0 && t.repeated() && len(t.numbers()) > 0 {
			like = 1
		}
		if like > most {
			most, g.measures = like, t
		}
	}
	if g.measures == nil {
		return
	}
	m := g.measures
	if other := slices.DeleteFunc(m.numbers(), looksLikeMeasure); len(other) > 0 && len(other) < len(m.numbers()) {
		g.note("%s: not named like measures, and yet among them: %s; name those that are traits under traits.use, and leave them out of the sets", m.file, strings.Join(shorten(other, 8), ", "))
	}
	g.note("%s holds the measures: %d columns%s", m.file, len(m.numbers()), sessionsOf(m))
	g.wholes = wholes(m.table, m.numbers())
	for _, w := range g.wholes {
		g.note("%s: the %d columns %s add to one; they are analysed as log-ratios", m.file, w.parts, w.pattern)
	}
	for _, name := range m.numbers() {
		lower := strings.ToLower(name)
		if (strings.Contains(lower, "dwell") || strings.Contains(lower, "interval")) && allPositive(m.table.Numbers(name)) && !g.partOfWhole(name) {
			g.logs = append(g.logs, name)
		}
	}
}

func sessionsOf(s *seen) string {
	if s.session != "" {
		return ", with a column of sessions (" + s.session + ")"
	}
	return ""
}

func (g *guessed) partOfWhole(name string) bool {
	return slices.ContainsFunc(g.wholes, func(w whole) bool { return strings.HasPrefix(name, strings.TrimSuffix(w.pattern, "*")) })
}

func allPositive(values []float64) bool {
	return !slices.ContainsFunc(values, func(v float64) bool { return v <= 0 }) // false for NaN
}

// confoundWords are columns of people that are usually adjusted for.
var confoundWords = []string{"age", "sex", "gender", "motion", "site", "scanner"}

func (g *guessed) chooseConfounds() {
	for _, name := range g.people.table.Names() {
		lower := strings.ToLower(name)
		// Our own name, where the column is mapped to one.
		column := name
		for _, ours := range []string{"age", "sex"} {
			if find(ours, g.people.table.Names()) == name {
				name = ours
			}
		}
		known := slices.Contains(confoundWords, lower) || strings.Contains(lower, "motion") || name != column
		if !known || !g.varies(column) {
			continue
		}
		g.confounds = append(g.confounds, name)
	}
}

// unused names the columns of people that the study makes no use of.
func (g *guessed) unused() []string {
	used := append(slices.Clone(g.confounds), g.people.person, g.people.session)
	for _, s := range synonyms {
		used = append(used, find(s.ours, g.people.table.Names()))
	}
	var left []string
	for _, name := range g.people.table.Names() {
		if !slices.Contains(used, name) {
			left = append(left, name)
		}
	}
	if len(left) == 0 {
		return nil
	}
	return []string{fmt.Sprintf("not used of %s: %s", g.people.file, strings.Join(shorten(left, 12), ", "))}
}

// varies says whether a column of people has two values or more.
func (g *guessed) varies(name string) bool {
	t := g.people.table
	if t.Numeric(name) {
		low, high := math.Inf(1), math.Inf(-1)
		for _, v := range t.Numbers(name) {
			if !math.IsNaN(v) {
				low, high = min(low, v), max(high, v)
			}
		}
		return high > low
	}
	cells := slices.DeleteFunc(slices.Clone(t.Text(name)), func(s string) bool { return s == "" })
	slices.Sort(cells)
	return len(slices.Compact(cells)) > 1
}

// countFamilies counts family labels, or else rows.
func countFamilies(s *seen) int {
	label, ok := s.kin["family"]
	if !ok {
		return s.table.Len()
	}
	labels := slices.Clone(s.table.Text(label))
	slices.Sort(labels)
	return len(slices.Compact(labels))
}

var plainName = regexp.MustCompile(`^[A-Za-z_][A-Za-z0-9_.-]*$`)

// word writes a name as YAML, in quotes where it could be read otherwise.
func word(name string) string {
	switch strings.ToLower(name) {
	case "y", "n", "yes", "no", "true", "false", "on", "off", "null", "nan":
	default:
		if plainName.MatchString(name) {
			return name
		}
	}
	quoted, err := json.Marshal(name)
	if err != nil {
		return "''"
	}
	return string(quoted)
}

func words(names []string) string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = word(n)
	}
	return "[" + strings.Join(out, ", ") + "]"
}

// yaml writes the study file.
func (g *guessed) yaml() []byte {
	var b strings.Builder
	line := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	line("# Written by kindwell init from the tables in this folder. Read every line before")
	line("# you run it; docs/configuration.md has all keys.")
	line("kindwell: 1")
	line("title: %s", word("A study of families"))
	line("seed: 1                          # any number; the same seed gives the same results")
	line("")
	line("people:")
	line("  file: %s", word(g.people.file))
	g.columns(line)
	if g.people.session != "" && g.people.repeated() {
		line("  session: %s               # several rows a person become one", word(g.people.session))
	}
	g.measuresYAML(line)
	g.traitsYAML(line)
	if len(g.confounds) > 0 {
		line("")
		line("# Their influence is removed inside every training set.")
		line("confounds:")
		line("  use: %s", words(g.confounds))
	}
	if g.measures != nil && len(g.traitList) > 0 {
		g.predictYAML(line)
	}
	g.heritabilityYAML(line)
	line("")
	line("output:")
	line("  folder: results                # beside this file")
	return []byte(b.String())
}

// columns maps names that differ from ours.
func (g *guessed) columns(line func(string, ...any)) {
	var mapped []string
	names := g.people.table.Names()
	for _, s := range synonyms {
		if s.ours == "session" {
			continue
		}
		if theirs := find(s.ours, names); theirs != "" && theirs != s.ours {
			mapped = append(mapped, s.ours+": "+word(theirs))
		}
	}
	if len(mapped) > 0 {
		line("  columns: {%s}", strings.Join(mapped, ", "))
	}
	if _, ok := g.people.kin["mother"]; !ok {
		line("  unknown_parents: full_siblings # what people of one family label are, where no parent is named")
	}
}

func (g *guessed) measuresYAML(line func(string, ...any)) {
	m := g.measures
	if m == nil {
		return
	}
	line("")
	line("measures:")
	line("  file: %s", word(m.file))
	if m.person != "person" {
		line("  columns: {person: %s}", word(m.person))
	}
	if m.session != "" {
		line("  session: %s", word(m.session))
	}
	line("  # Were the states learned on other people (other_people), or on these very people")
	line("  # (same_people: a leak that no fold can mend)? No table tells; this is the cautious")
	line("  # answer. no_states: the measures come from no learned states.")
	line("  states_learned_on: same_people")
	line("  sets:                          # measures that predict together")
	for i, w := range g.wholes {
		line("    %s: [%s]", word(wholeName(w, i)), word(w.pattern))
	}
	line("    everything: %s", words(m.numbers()))
	if len(g.wholes) == 0 && len(g.logs) == 0 {
		return
	}
	line("  transform:")
	for i, w := range g.wholes {
		zeros := ""
		if w.zeros > 0 {
			zeros = fmt.Sprintf(", zeros: %v", w.zeros)
		}
		line("    - {match: [%s], as: clr, composition: %s%s} # parts of one whole", word(w.pattern), word(wholeName(w, i)), zeros)
	}
	if len(g.logs) > 0 {
		line("    - {match: %s, as: log} # times are skewed", words(g.logs))
	}
}

// wholeName names a composition after the stem of its parts.
func wholeName(w whole, i int) string {
	if name := strings.TrimRight(strings.TrimSuffix(w.pattern, "*"), "_"); name != "" && name != "everything" {
		return name
	}
	return fmt.Sprintf("whole_%d", i+1)
}

func (g *guessed) traitsYAML(line func(string, ...any)) {
	if len(g.traits) == 0 {
		return
	}
	var files []string
	for _, t := range g.traits {
		files = append(files, t.file)
	}
	line("")
	line("traits:")
	line("  files: %s", words(files))
	if p := g.traits[0].person; p != "person" {
		line("  columns: {person: %s}", word(p))
	}
	for _, t := range g.traits {
		if t.session != "" {
			line("  session: %s", word(t.session))
			break
		}
	}
	line("  use: %s", words(g.traitList))
}

func (g *guessed) predictYAML(line func(string, ...any)) {
	outer := min(10, max(2, g.families/4))
	line("")
	line("# Every trait is predicted from every set, in people whose family was never seen.")
	line("predict:")
	line("  outer: {folds: %d, repeats: 5}", outer)
	line("  inner: {folds: %d}              # inside the training families; chooses the penalty", min(5, max(2, g.families/8)))
	line("  metric: r_by_fold              # what is tested: r_by_fold, r, rho or r2")
	line("  permutations: 1000             # 0: no test")
}

func (g *guessed) heritabilityYAML(line func(string, ...any)) {
	var covariates []string
	for _, name := range g.confounds {
		if name == "age" || name == "sex" {
			covariates = append(covariates, name)
		}
	}
	line("")
	line("# Choose the full model before you look at results.")
	line("heritability:")
	if g.twins {
		line("  full: ACE                      # or ADE; there are twins")
	} else {
		line("  full: AE                       # no zygosity column: without twins A and C are hard to tell apart")
		line("  models: [AE, CE, E]")
	}
	line("  covariates: %s", words(covariates))
}
