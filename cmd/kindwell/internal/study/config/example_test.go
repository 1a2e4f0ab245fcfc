package config_test

import (
	"fmt"

	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/internal/names"
)

func ExampleParse() {
	_, err := config.Parse("study.yaml", []byte(`kindwell: 1
seed: 7
people: {file: people.csv}
traits: {file: mood.csv, use: [wellbeing]}
heritability:
  ful: AE
  models: [AE, E, CE, AC]
`))
	fmt.Println(err)
	// Output:
	// study.yaml:6:3: unknown key `ful` in `heritability`
	//     6 |   ful: AE
	//       |   ^
	//       did you mean `full`?
	//
	// study.yaml:7:23: `heritability.models[3]` must be one of `ACE`, `ADE`, `AE`, `CE`, `E`, found the text "AC"
	//     7 |   models: [AE, E, CE, AC]
	//       |                       ^
	//       did you mean `ACE`?
}

// A name that is no column is reported like a fault of the file itself.
func ExampleStudy_At() {
	study, err := config.Parse("study.yaml", []byte(`kindwell: 1
seed: 7
people: {file: people.csv}
traits: {file: mood.csv, use: [welbeing]}
`))
	if err != nil {
		fmt.Println(err)
		return
	}
	columns := []string{"fatigue", "wellbeing"}
	var faults config.Faults
	for i, name := range study.Traits.Use {
		faults.Add(study.At(fmt.Sprintf("traits.use[%d]", i)),
			"`"+name+"` is no column of mood.csv",
			"did you mean `"+names.Nearest(name, columns)+"`?")
	}
	fmt.Println(faults.Err())
	// Output:
	// study.yaml:4:32: `welbeing` is no column of mood.csv
	//     4 | traits: {file: mood.csv, use: [welbeing]}
	//       |                                ^
	//       did you mean `wellbeing`?
}
