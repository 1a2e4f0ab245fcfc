package study

import (
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"kindwell/cmd/kindwell/internal/cohort"
	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/crossval"
	"kindwell/twin"
)

// Purposes of the random streams of a study. A stream depends on nothing but
// the seed, its purpose and an index, so that a further trait or set moves no
// other number.
const (
	foldPurpose        = "folds"
	arrangementPurpose = "arrangements"
)

// readFolds reads the tables of given folds, if the study has any.
func (p *Plan) readFolds() error {
	s := p.Study.Predict
	if s == nil || s.Outer.File == "" {
		return nil
	}
	in := cohort.FoldsInput{Outer: s.Outer.File, Inner: s.Inner.File}
	table, files, err := p.Cohort.ReadFolds(in)
	if err != nil {
		return err
	}
	p.foldTable, p.foldFiles = table, files
	return nil
}

// foldsOf makes the folds of group i, or takes them from the tables given.
func (p *Plan) foldsOf(i int) (*crossval.Folds, error) {
	g, s := &p.groups[i], p.Study.Predict
	family := p.familiesOf(g.rows)
	levels, names := p.levelColumns(g.rows)
	opt := crossval.FoldOptions{Inner: s.Inner.Folds, Seed: p.Study.Seed, Purpose: foldPurpose, Levels: levels}
	var folds *crossval.Folds
	var err error
	path := "predict.outer"
	switch {
	case s.Outer.File != "":
		path = "predict.outer.file"
		given, forErr := p.foldTable.For(strconv.Itoa(i+1), g.rows)
		if forErr != nil {
			return nil, forErr
		}
		tables := make([]crossval.Given, len(given))
		for r := range given {
			tables[r] = crossval.Given{Outer: given[r].Outer, Inner: given[r].Inner}
		}
		if s.Inner.File != "" {
			opt.Inner = 0
		}
		folds, err = crossval.GivenFolds(family, tables, opt)
	case s.Outer.LeaveOut == config.LeaveOutFamily:
		folds, err = crossval.LeaveOneFamilyOut(family, opt)
	default:
		opt.Outer, opt.Repeats = s.Outer.Folds, s.Outer.Repeats
		folds, err = crossval.BalancedFolds(family, opt)
	}
	if err != nil {
		var count *crossval.CountError
		if errors.As(err, &count) && (count.Fold >= 0 || count.Outer <= count.Families) {
			path = "predict.inner"
		}
		var f faults
		f.study(p.Study, path, p.foldTrouble(err, g, names), "")
		return nil, f.err()
	}
	if least := smallestFold(folds); s.Metric == config.MetricRByFold && least < leastForR {
		var f faults
		f.study(p.Study, path, fmt.Sprintf("%s: the smallest outer fold has %d people, and r_by_fold needs %d in each", strings.Join(g.traits, ", "), least, leastForR),
			"ask for fewer folds, or test another metric (metric: r or r2)")
		return nil, f.err()
	}
	return folds, nil
}

// leastForR is the number of people that a correlation needs.
const leastForR = 3

// smallestFold is the number of people in the smallest outer fold.
func smallestFold(folds *crossval.Folds) int {
	least := folds.People()
	for _, r := range folds.Repeats {
		size := make([]int, r.OuterCount)
		for _, o := range r.Outer {
			size[o]++
		}
		least = min(least, slices.Min(size))
	}
	return least
}

// foldTrouble says what is wrong with folds in the names of the study.
func (p *Plan) foldTrouble(err error, g *group, columns []string) string {
	about := strings.Join(g.traits, ", ")
	var count *crossval.CountError
	if errors.As(err, &count) {
		switch {
		case count.Fold >= 0:
			return fmt.Sprintf("%s: with outer fold %d held out %d families are left, too few for %d inner folds", about, count.Fold+1, count.Training, count.Inner)
		case count.Outer > count.Families:
			return fmt.Sprintf("%s: %d outer folds asked of %d families; families are never split, so ask for %d or fewer", about, count.Outer, count.Families, count.Families)
		}
		return fmt.Sprintf("%s: %d inner folds need %d families or more, there are %d", about, count.Inner, 2*count.Inner, count.Families)
	}
	var level *crossval.LevelError
	if errors.As(err, &level) && level.Column >= 0 {
		v := p.Cohort.Variables[columns[level.Column]]
		var people []string
		for _, i := range level.People {
			people = append(people, p.Cohort.People[g.rows[i]])
		}
		return fmt.Sprintf("%s: level %q of confound %s is held by %d people in %d families (%s) and cannot be kept in every training set; join it with another level, or leave these people out",
			about, v.Levels[level.Level], v.Name, len(level.People), level.Families, strings.Join(shorten(people, 6), ", "))
	}
	return about + ": " + plain(err)
}

// familiesOf numbers the family of each row.
func (p *Plan) familiesOf(rows []int) []int {
	family := make([]int, len(rows))
	for i, row := range rows {
		family[i] = p.Cohort.Pedigree.Family(row)
	}
	return family
}

// levelColumns are the confounds that are categories, as codes.
func (p *Plan) levelColumns(rows []int) (codes [][]int, names []string) {
	for _, name := range p.Study.Confounds.Use {
		if v := p.Cohort.Variables[name]; !v.Numeric {
			codes = append(codes, pick(v.Codes, rows))
			names = append(names, name)
		}
	}
	return codes, names
}

// exchangeOf finds all arrangements of a group that keep every relation.
func (p *Plan) exchangeOf(g *group) (*crossval.Exchange, error) {
	opt := twin.BlockOptions{DZWithSiblings: p.Study.People.DZTwins == config.DZWithSiblings}
	for _, name := range p.Study.People.StructureBy {
		codes, _ := p.Cohort.Variables[name].Groups()
		opt.Marks = append(opt.Marks, pick(codes, g.rows))
	}
	return crossval.NewExchange(len(g.rows), p.Cohort.Pedigree.Blocks(g.rows, opt))
}
