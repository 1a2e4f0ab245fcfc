package study

// Progress is told which stage a run is in. Its methods may be called from
// several goroutines.
type Progress interface {
	// Stage starts a stage of a known number of steps.
	Stage(name string, steps int) Stage
}

// Stage is one stage of a run.
type Stage interface {
	// Step says that n more steps are done.
	Step(n int)
	// Done ends the stage, complete or not.
	Done()
}

// Silent is a Progress that shows nothing.
type Silent struct{}

// Stage returns a stage that shows nothing.
func (Silent) Stage(string, int) Stage { return silentStage{} }

type silentStage struct{}

func (silentStage) Step(int) {}
func (silentStage) Done()    {}
