package cohort

import (
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// BenchmarkReadTable reads 2,000 people with 500 measures, 13 MB of text.
func BenchmarkReadTable(b *testing.B) {
	var s strings.Builder
	random := rand.New(rand.NewPCG(1, 2))
	s.WriteString("person,session")
	for j := range 500 {
		fmt.Fprintf(&s, ",measure_%d", j)
	}
	for i := range 2000 {
		fmt.Fprintf(&s, "\nP%04d,1", i)
		for range 500 {
			fmt.Fprintf(&s, ",%.10f", random.NormFloat64())
		}
	}
	folder := b.TempDir()
	if err := os.WriteFile(filepath.Join(folder, "wide.csv"), []byte(s.String()), 0o600); err != nil {
		b.Fatal(err)
	}
	b.SetBytes(int64(s.Len()))
	b.ReportAllocs()
	roles := map[string]Role{"person": ID, "session": ID}
	for b.Loop() {
		t, _, err := ReadTable(folder, "wide.csv", TableOptions{Roles: roles, Other: Number})
		if err != nil || t.Len() != 2000 {
			b.Fatal(t, err)
		}
	}
}
