package invent

import (
	"bytes"
	"math"
	"strconv"

	"kindwell/internal/stream"
)

// Seed is the seed of the cohort in testdata/saltmere.
const Seed = 20260165

// Chances that something is missing, in thousandths.
const (
	oneSession   = 50 // a person came once only
	noSheet      = 25 // a sheet of questionnaires, mood or sleep, was not filled in
	noSleepTable = 12 // a person has no row in sleep.csv
	noMotion     = 8
)

// Tables returns the invented tables by file name: people.csv, dynamics.csv,
// mood.csv and sleep.csv. The cohort of about 600 people is laid out so many
// times over, all of them different; with many, the planted truth shows to any
// accuracy.
func Tables(seed uint64, times int) map[string][]byte {
	c := newCohort(seed, times)
	all := c.drivesOf(seed)
	people := newTable("person", "family", "mother", "father", "twin_set", "zygosity", "age", "sex", "motion")
	mood := newTable("person", "wellbeing", "fatigue", "sociability")
	sleeping := newTable("person", "sleep_quality", "vigilance")
	dynamics := newTable(dynamicsHeader()...)
	for j := range c.people {
		p := &c.people[j]
		if !p.row {
			continue
		}
		gaps := stream.New(seed, "saltmere gaps", uint64(j))
		chance := func(thousandths int) bool { return gaps.IntN(1000) < thousandths }
		decades := ageInDecades(float64(p.tenths) / 10)
		motion := math.Round(motionOf(&all[j], decades, p.male)*1000) / 1000
		people.row(c.peopleRow(p, motion, chance(noMotion))...)
		once, filledMood, filledSleep, hasSleep := chance(oneSession), !chance(noSheet), !chance(noSheet), !chance(noSleepTable)
		if !p.recorded {
			continue
		}
		s := scoresOf(&all[j], decades, motion, p.male)
		mood.row(p.id, answer(s.wellbeing, filledMood), answer(s.fatigue, filledMood), answer(s.sociability, filledMood))
		if hasSleep {
			sleeping.row(p.id, answer(s.sleepQuality, filledSleep), answer(s.vigilance, filledSleep))
		}
		for session := range 2 {
			if session == 1 && once {
				break
			}
			draw := stream.New(seed, "saltmere sessions", uint64(j), uint64(session))
			dynamics.row(dynamicsRow(p.id, session+1, newChain(&all[j], decades, draw).run(draw))...)
		}
	}
	return map[string][]byte{"people.csv": people.Bytes(), "dynamics.csv": dynamics.Bytes(), "mood.csv": mood.Bytes(), "sleep.csv": sleeping.Bytes()}
}

func (c *cohort) peopleRow(p *person, motion float64, lostMotion bool) []string {
	mother, father := "", ""
	if p.mother >= 0 && !p.hideParents {
		mother, father = c.people[p.mother].id, c.people[p.father].id
	}
	sex := "F"
	if p.male {
		sex = "M"
	}
	if lostMotion {
		motion = math.NaN()
	}
	return []string{p.id, p.family, mother, father, p.twinSet, p.zygosity, decimals(float64(p.tenths)/10, 1), sex, decimals(motion, 3)}
}

func dynamicsHeader() []string {
	names := []string{"person", "session"}
	for _, stem := range []string{"occupancy_", "dwell_mean_s_", "interval_mean_s_"} {
		for i := range states {
			names = append(names, stem+strconv.Itoa(i+1))
		}
	}
	return append(names, "switching_rate_hz")
}

func dynamicsRow(id string, session int, s summary) []string {
	cells := []string{id, strconv.Itoa(session)}
	for _, n := range s.occupied {
		cells = append(cells, decimals(float64(n)/samples, 5))
	}
	for _, x := range s.dwell {
		cells = append(cells, decimals(x, 4))
	}
	for _, x := range s.interval {
		cells = append(cells, decimals(x, 3))
	}
	return append(cells, decimals(s.switching, 3))
}

// table is a CSV file in the making; no cell of ours needs quotes.
type table struct{ bytes.Buffer }

func newTable(header ...string) *table {
	t := &table{}
	t.row(header...)
	return t
}

func (t *table) row(cells ...string) {
	for i, cell := range cells {
		if i > 0 {
			t.WriteByte(',')
		}
		t.WriteString(cell)
	}
	t.WriteByte('\n')
}

// decimals writes x with so many decimals; NaN is an empty cell.
func decimals(x float64, count int) string {
	if math.IsNaN(x) {
		return ""
	}
	return strconv.FormatFloat(x, 'f', count, 64)
}

func answer(score int, given bool) string {
	if !given {
		return ""
	}
	return strconv.Itoa(score)
}

// score rounds a questionnaire score into its range.
func score(x float64, low, high int) int {
	return min(max(int(math.Round(x)), low), high)
}

func exp(x float64) float64 { return math.Exp(x) }
