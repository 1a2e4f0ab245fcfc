// Package saltmere holds the Saltmere families: an invented cohort with known
// truth and the study file that analyses it. README.md says what was planted.
package saltmere

import (
	"embed"
	"io/fs"
)

//go:generate go run ./generate

//go:embed README.md study.yaml people.csv dynamics.csv mood.csv sleep.csv
var files embed.FS

// Files returns the files of the demo, all in one folder: the tables
// people.csv, dynamics.csv, mood.csv and sleep.csv, study.yaml and README.md.
func Files() fs.FS { return files }
