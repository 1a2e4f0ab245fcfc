package cohort_test

import (
	"fmt"
	"os"
	"path/filepath"

	"kindwell/cmd/kindwell/internal/cohort"
)

func write(folder, name, text string) {
	if err := os.WriteFile(filepath.Join(folder, name), []byte(text), 0o600); err != nil {
		panic(err)
	}
}

// A pair of twins with their mother and two sessions of one measure.
func ExampleLoad() {
	folder, err := os.MkdirTemp("", "cohort")
	if err != nil {
		panic(err)
	}
	defer os.RemoveAll(folder)
	write(folder, "people.csv", "person,mother,twin_set,zygosity,age\n001,M,T,MZ,30\n002,M,T,MZ,30\nM,,,,35\n")
	write(folder, "dynamics.csv", "person,session,dwell_s\n001,1,0.25\n001,2,0.75\n002,1,0.5\n")
	write(folder, "mood.csv", "person,wellbeing\n002,4\n001,NA\n")

	c, err := cohort.Load(cohort.Inputs{
		Folder:   folder,
		People:   cohort.PeopleInput{File: "people.csv"},
		Measures: &cohort.MeasuresInput{Files: []string{"dynamics.csv"}, Session: "session"},
		Traits:   []cohort.TableInput{{File: "mood.csv"}},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(c.People, c.Pedigree.Relation(0, 1), c.FamilyLabel[0])
	for i, row := range c.Measures.Rows {
		fmt.Println(c.People[row.Person], row.Session, c.Measures.Values.At(i, 0))
	}
	fmt.Println(c.Names, c.Variables["wellbeing"].Values)
	fmt.Println(c.Warnings[0].Message)
	// Output:
	// [001 002 M] mz 001
	// 001 1 0.25
	// 001 2 0.75
	// 002 1 0.5
	// [zygosity age wellbeing] [NaN 4 NaN]
	// people.csv, child on row 2 (age 30), mother on row 4 (age 35): the mother is less than 12 years older than the child
}

func ExampleFaults() {
	folder, err := os.MkdirTemp("", "cohort")
	if err != nil {
		panic(err)
	}
	defer os.RemoveAll(folder)
	write(folder, "people.csv", "person,mother,twin_set,zygosity\nA,M,T,MZ\nB,N,T,MZ\n")
	_, err = cohort.Load(cohort.Inputs{Folder: folder, People: cohort.PeopleInput{File: "people.csv"}})
	fmt.Println(err)
	// Output:
	// people.csv:3: column "mother": "N": "B" has the mother "N", the co-twin "A" has "M"; twins have one mother (row 2)
}

func ExampleMatch() {
	names := []string{"occupancy_1", "occupancy_2", "dwell_1", "switching_rate_hz"}
	matched, unmatched := cohort.Match([]string{"occupancy_*", "*_hz", "fano_*"}, names)
	for _, j := range matched {
		fmt.Println(names[j])
	}
	fmt.Println("nothing for", unmatched)
	// Output:
	// occupancy_1
	// occupancy_2
	// switching_rate_hz
	// nothing for [fano_*]
}
