package tidy_test

import (
	"fmt"
	"os"
	"path/filepath"

	"kindwell/cmd/kindwell/internal/tidy"
)

// A number that nobody filled in is an empty cell.
func ExampleWrite() {
	row := tidy.Blank[tidy.Penalty]()
	row.Trait, row.Set, row.Repeat, row.Fold = "wellbeing", "occupancy", 1, 3
	row.Penalty = 1e6
	row.AtEnd = "high"
	if err := tidy.Write(os.Stdout, []tidy.Penalty{row}); err != nil {
		fmt.Println(err)
	}
	// Output:
	// trait,set,repeat,fold,penalty,inner_mse,at_end
	// wellbeing,occupancy,1,3,1000000,,high
}

func ExampleCreate() {
	parent, err := os.MkdirTemp("", "example")
	if err != nil {
		fmt.Println(err)
		return
	}
	defer os.RemoveAll(parent)

	folder, err := tidy.Create(filepath.Join(parent, "results"), false)
	if err != nil {
		fmt.Println(err)
		return
	}
	defer folder.Abort()
	rows := []tidy.Relation{{Relation: "mz", Pairs: 84, Families: 84, SharingHome: 84}}
	if err := tidy.WriteTable(folder, rows); err != nil {
		fmt.Println(err)
		return
	}
	if err := folder.Commit(); err != nil {
		fmt.Println(err)
		return
	}
	table, err := os.Open(filepath.Join(folder.Path(), "relations.csv"))
	if err != nil {
		fmt.Println(err)
		return
	}
	defer table.Close()
	back, err := tidy.Read[tidy.Relation](table)
	fmt.Println(back[0].Pairs, err)
	// Output: 84 <nil>
}
