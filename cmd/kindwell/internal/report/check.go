package report

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"kindwell/cmd/kindwell/internal/tidy"
)

// Checked is what a study holds and what a run of it would do.
type Checked struct {
	Title     string         `json:"title"`
	People    int            `json:"people"`
	Families  int            `json:"families"`
	Sibships  int            `json:"sibships"`
	Files     []CheckedFile  `json:"files"`
	Relations []Relation     `json:"relations"`
	Measures  int            `json:"measures"`
	Sessions  *Sessions      `json:"sessions,omitempty"`
	Missing   []Missing      `json:"missing"`
	Groups    []CheckedGroup `json:"people_groups"`
	Variables int            `json:"variables"`
	// DetectableA2 is the least a2 that the twins show with a power of 0.8.
	DetectableA2 Float    `json:"detectable_a2"`
	Work         []string `json:"work"`
	Warnings     []Note   `json:"warnings"`
}

// Sessions counts the sessions of the measures.
type Sessions struct {
	Sessions int `json:"sessions"`
	People   int `json:"people"`
	Several  int `json:"people_with_two_or_more"`
}

// CheckedFile is one input table.
type CheckedFile struct {
	Name   string `json:"name"`
	SHA256 string `json:"sha256"`
	Bytes  int64  `json:"bytes"`
}

// Relation is one kind of pair.
type Relation struct {
	Relation    string `json:"relation"`
	Pairs       int    `json:"pairs"`
	Families    int    `json:"families"`
	SharingHome int    `json:"sharing_home"`
}

// Missing counts the people without a value of a variable.
type Missing struct {
	Variable string `json:"variable"`
	People   int    `json:"people"`
}

// CheckedGroup is a group of traits with the same people.
type CheckedGroup struct {
	Traits   []string `json:"traits"`
	People   int      `json:"people"`
	Families int      `json:"families"`
	// Structures are the kinds of families among these people.
	Structures []Structure `json:"structures"`
	// Log10Arrangements is the decimal logarithm of the number of allowed
	// arrangements; 0 means that nothing can be rearranged.
	Log10Arrangements float64 `json:"log10_arrangements"`
	FamiliesFixed     int     `json:"families_fixed"`
	// DetectableR is the least correlation that this many people show with a
	// power of 0.8 in a two-sided test at .05.
	DetectableR Float `json:"detectable_r"`
	// Explained is the share of each trait's variance that the confounds
	// explain in these people.
	Explained []Float `json:"explained_by_confounds"`
}

// Structure is a kind of family.
type Structure struct {
	Size       int    `json:"size"`
	Families   int    `json:"families"`
	Symmetries string `json:"symmetries"`
}

// Note is one warning.
type Note struct {
	Analysis string `json:"analysis"`
	About    string `json:"about"`
	Message  string `json:"message"`
}

// Float is a number that may be missing (NaN), null in JSON.
type Float float64

// MarshalJSON writes null for a missing number.
func (f Float) MarshalJSON() ([]byte, error) {
	if math.IsNaN(float64(f)) || math.IsInf(float64(f), 0) {
		return []byte("null"), nil
	}
	return strconv.AppendFloat(nil, float64(f), 'g', -1, 64), nil
}

// Notes turns rows of warnings.csv into notes.
func Notes(rows []tidy.Warning) []Note {
	notes := make([]Note, len(rows))
	for i, r := range rows {
		notes[i] = Note(r)
	}
	return notes
}

// CheckJSON prints a check for programs.
func CheckJSON(w io.Writer, c Checked) error {
	enc := json.NewEncoder(w)
	enc.SetIndent("", "  ")
	return enc.Encode(c)
}

// CheckText prints a check for people.
func CheckText(w io.Writer, c Checked) error {
	var b strings.Builder
	if c.Title != "" {
		fmt.Fprintf(&b, "%s\n\n", c.Title)
	}
	fmt.Fprintf(&b, "Who is in\n  %s in %s, %s of two or more\n", people(c.People), families(c.Families), counted(c.Sibships, "sibship"))
	if c.Measures > 0 {
		fmt.Fprintf(&b, "  %s", counted(c.Measures, "measure"))
		if s := c.Sessions; s != nil {
			fmt.Fprintf(&b, " in %s of %s; %s with two or more", counted(s.Sessions, "session"), people(s.People), people(s.Several))
		}
		b.WriteString("\n")
	}
	checkRelations(&b, c.Relations)
	if len(c.Missing) > 0 {
		b.WriteString("\nMissing values\n")
		for _, m := range c.Missing {
			fmt.Fprintf(&b, "  %s: %d of %d people\n", m.Variable, m.People, c.People)
		}
	}
	for i, g := range c.Groups {
		checkGroup(&b, i+1, g)
	}
	if c.Variables > 0 {
		fmt.Fprintf(&b, "\nHeritability\n  %s", counted(c.Variables, "variable"))
		if a2 := float64(c.DetectableA2); !math.IsNaN(a2) {
			fmt.Fprintf(&b, "; smallest a2 that these twin pairs show with a power of 80 %%: %.2f", a2)
		}
		b.WriteString("\n")
	}
	if len(c.Work) > 0 {
		b.WriteString("\nA run does\n")
		for _, line := range c.Work {
			fmt.Fprintf(&b, "  %s\n", line)
		}
	}
	if len(c.Warnings) > 0 {
		fmt.Fprintf(&b, "\nWarnings (%d)\n", len(c.Warnings))
		checkNotes(&b, c.Warnings)
	} else {
		b.WriteString("\nNo warnings\n")
	}
	_, err := io.WriteString(w, b.String())
	return err
}

// checkNotes lists warnings, a few of each kind.
func checkNotes(b *strings.Builder, notes []Note) {
	const most = 8
	type kind struct{ analysis, about string }
	count := map[kind]int{}
	for _, n := range notes {
		count[kind{n.Analysis, n.About}]++
	}
	shown := map[kind]int{}
	for _, n := range notes {
		k := kind{n.Analysis, n.About}
		shown[k]++
		switch {
		case shown[k] <= most:
			fmt.Fprintf(b, "  %s\n", noteLine(n))
		case shown[k] == most+1:
			fmt.Fprintf(b, "  %s: and %d more (all with --format json)\n", noteKind(n), count[k]-most)
		}
	}
}

func noteKind(n Note) string {
	if n.About == "" {
		return n.Analysis
	}
	return n.Analysis + ", " + n.About
}

func noteLine(n Note) string {
	return noteKind(n) + ": " + n.Message
}

func checkRelations(b *strings.Builder, relations []Relation) {
	b.WriteString("\nRelations found\n")
	table := [][]string{{"  relation", "pairs", "families", "sharing home"}}
	for _, r := range relations {
		table = append(table, []string{"  " + r.Relation, fmt.Sprint(r.Pairs), fmt.Sprint(r.Families), fmt.Sprint(r.SharingHome)})
	}
	if len(table) == 1 {
		b.WriteString("  none\n")
		return
	}
	align(b, table, 1)
}

func checkGroup(b *strings.Builder, number int, g CheckedGroup) {
	fmt.Fprintf(b, "\nGroup of people %d: %s\n  %s in %s with everything that is needed\n", number, strings.Join(g.Traits, ", "), people(g.People), families(g.Families))
	if r := float64(g.DetectableR); !math.IsNaN(r) {
		fmt.Fprintf(b, "  smallest correlation that this many independent people show with a power of 80 %%: %.2f\n", r)
	}
	for i, share := range g.Explained {
		if v := float64(share); !math.IsNaN(v) {
			fmt.Fprintf(b, "  the confounds explain %.1f %% of %s\n", 100*v, g.Traits[i])
		}
	}
	if g.Log10Arrangements == 0 {
		b.WriteString("  these families allow no arrangement but the one observed: nothing can be tested by rearranging\n")
	} else {
		fmt.Fprintf(b, "  arrangements that keep every relation: 10^%.1f; families that cannot move: %d\n", g.Log10Arrangements, g.FamiliesFixed)
	}
	const most = 12
	for _, s := range g.Structures[:min(len(g.Structures), most)] {
		fmt.Fprintf(b, "    %d of %s with %s\n", s.Families, people(s.Size), ways(s.Symmetries))
	}
	if n := len(g.Structures) - most; n > 0 {
		fmt.Fprintf(b, "    and %d more structures\n", n)
	}
}

func people(n int) string {
	if n == 1 {
		return "1 person"
	}
	return fmt.Sprintf("%d people", n)
}

func families(n int) string {
	if n == 1 {
		return "1 family"
	}
	return fmt.Sprintf("%d families", n)
}

// counted writes a number with its noun, in the plural where that takes an s.
func counted(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

func ways(symmetries string) string {
	if symmetries == "1" {
		return "nothing to exchange inside"
	}
	return symmetries + " arrangements inside"
}
