package invent

// states is the number of brain states.
const states = 9

// The drives of a person, in the order in which they are drawn.
const (
	occupancy    = 0                // + state: share of time in the state
	dwell        = states           // + state: length of its visits
	speed        = 2 * states       // pace of the whole sequence
	restlessness = speed + 1        // motion beside what comes with speed
	tiredness    = restlessness + 1 // fatigue beside what comes with dynamics
	contentment  = tiredness + 1    // wellbeing, likewise
	company      = contentment + 1  // sociability
	sleep        = company + 1      // sleep quality
	alertness    = sleep + 1        // vigilance beside age and motion
	drives       = alertness + 1    // their number
)

// shares are the parts of a drive's variance, which is 1: a additive genetic,
// c shared home; the rest is a person's own.
type shares struct{ a, c float64 }

// planted holds the shares of every drive. States count from 0 here: state 3
// of the tables is index 2.
func planted() [drives]shares {
	var s [drives]shares
	for i := range states {
		s[occupancy+i] = shares{a: 0.30, c: 0.10}
		s[dwell+i] = shares{a: 0.30}
	}
	s[occupancy+2] = shares{a: 0.75} // state 3: genes
	s[occupancy+5] = shares{c: 0.65} // state 6: home
	s[occupancy+7] = shares{}        // state 8: neither
	s[dwell+4] = shares{a: 0.50}     // state 5
	s[speed] = shares{a: 0.50}
	s[restlessness] = shares{a: 0.45}
	s[tiredness] = shares{a: 0.30}
	s[contentment] = shares{a: 0.20, c: 0.20}
	s[company] = shares{a: 0.65}
	return s
}

// base is what an average person of 27 years has in each state.
var base = [states]struct {
	weight  float64 // of the state, to which its share of time is nearly proportional
	dwell   float64 // mean length of a visit, s
	spread  float64 // standard deviation of the logarithm of the weight over people
	cluster int     // states of one cluster follow each other more often
}{
	{0.17, 0.14, 0.35, 0}, {0.15, 0.11, 0.35, 0}, {0.12, 0.16, 0.35, 0},
	{0.13, 0.10, 0.35, 1}, {0.12, 0.18, 0.35, 1}, {0.11, 0.12, 0.35, 1},
	{0.10, 0.20, 0.35, 2}, {0.08, 0.09, 0.35, 2}, {0.02, 0.13, 1.10, 2},
}

const (
	dwellSpread  = 0.18 // standard deviation of the logarithm of a state's mean visit over people
	speedSpread  = 0.12 // standard deviation of the logarithm of the common pace
	sessionNoise = 0.40 // standard deviation of a session's own part of a drive, in its units
	withinFactor = 1.6  // how much likelier the next state is of the same cluster
)

// ageInDecades is age as the effects below count it.
func ageInDecades(years float64) float64 { return (years - 27) / 10 }

// Effects of age, per decade, on the drives of dynamics: with them, and with
// motion going along with speed, age and motion are true confounds.
const (
	ageOnState1 = -0.35 // on the occupancy drive of state 1
	ageOnSpeed  = -0.25 // on the drive of speed
)

// motionOf returns a person's mean head motion, mm, which goes along with the
// speed of the sequence, rises with age and is a little higher in men.
func motionOf(d *[drives]float64, decades float64, male bool) float64 {
	x := 0.55*d[speed] + 0.835*d[restlessness] + 0.30*decades
	if male {
		x += 0.2
	}
	return 0.17 * exp(0.33*x)
}

// The scores of a person who answers everything.
type scores struct{ wellbeing, fatigue, sociability, sleepQuality, vigilance int }

// scoresOf returns the questionnaire scores from drives, recorded age and
// motion, and sex.
func scoresOf(d *[drives]float64, decades, motion float64, male bool) scores {
	woman := 1.0
	if male {
		woman = 0
	}
	return scores{
		wellbeing:    score(15+3.5*(0.30*d[dwell+1]-0.30*d[dwell+6]+0.90*d[contentment]), 0, 25),
		fatigue:      score(18+6*(0.42*d[occupancy+2]+0.28*d[dwell+4]+0.20*woman+0.85*d[tiredness]), 0, 40),
		sociability:  score(17+4.5*d[company], 0, 30),
		sleepQuality: score(11+3.2*d[sleep], 0, 21),
		vigilance:    score(62-5*decades-110*(motion-0.18)+7*d[alertness], 0, 100),
	}
}
