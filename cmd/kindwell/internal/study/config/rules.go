package config

import (
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"kindwell/internal/names"
)

// checker holds rules that span several keys. A rule is left out where one
// of its keys was refused already.
type checker struct {
	*Study
	*decoder
}

// at is the place of the deepest part of a path that is in the file.
func (c *checker) at(path string) place {
	p := c.At(path)
	return place{p.Line, p.Column}
}

// ok says whether none of these keys was refused.
func (c *checker) ok(paths ...string) bool {
	return !slices.ContainsFunc(paths, func(path string) bool { return c.bad[path] })
}

func (c *checker) wrong(path, message, advice string) {
	c.fault(c.at(path), message, advice)
}

func (c *checker) check() {
	if c.Measures == nil && c.Traits == nil && c.ok("measures", "traits") {
		c.wrong("", "a study needs `measures` or `traits`", "add a section `measures`, a section `traits`, or both")
	}
	c.checkPeople()
	c.checkConfounds()
	if c.Measures != nil {
		c.checkMeasures()
	}
	if c.Traits != nil {
		c.checkColumns("traits", []column{{"columns.person", c.Traits.Columns.Person}, {"session", c.Traits.Session}})
	}
	if c.Predict != nil {
		c.checkPredict()
	}
	if c.Heritability != nil {
		c.checkHeritability()
	}
	folder := filepath.ToSlash(filepath.Clean(c.Output.Folder))
	if c.Given("output.folder") && c.ok("output.folder") && (folder == "." || folder == "/" || strings.HasSuffix("/"+folder, "/..")) {
		c.wrong("output.folder", "`output.folder` must be a folder that holds nothing but results", "name a new folder, such as `results`")
	}
}

// column is a key that names a column.
type column struct{ key, name string }

// checkColumns refuses one column under two names.
func (c *checker) checkColumns(section string, columns []column) {
	first := map[string]string{}
	for _, col := range columns {
		path := join(section, col.key)
		if col.name == "" || !c.ok(path) {
			continue
		}
		if earlier, ok := first[col.name]; ok {
			c.wrong(path, fmt.Sprintf("`%s` names the column `%s`, as `%s` does", path, shorten(col.name), earlier), "name two different columns")
			continue
		}
		first[col.name] = path
	}
}

func (c *checker) checkPeople() {
	p := c.People.Columns
	c.checkColumns("people", []column{
		{"columns.person", p.Person}, {"columns.family", p.Family}, {"columns.mother", p.Mother},
		{"columns.father", p.Father}, {"columns.twin_set", p.TwinSet}, {"columns.zygosity", p.Zygosity},
		{"columns.mz_set", p.MZSet}, {"columns.reared_in", p.RearedIn}, {"columns.birth_order", p.BirthOrder},
		{"columns.sex", p.Sex}, {"columns.age", p.Age}, {"session", c.People.Session},
	})
}

func (c *checker) checkMeasures() {
	m := c.Measures
	c.checkColumns("measures", []column{{"columns.person", m.Columns.Person}, {"session", m.Session}})
	if c.Given("measures.sets") && c.ok("measures.sets") && !c.Given(join("measures.sets", m.Sets[0].Name)) {
		c.wrong("measures.sets", "`measures.sets` holds no set", "write `everything: [\"*\"]` below it, or remove the key")
	}
	rule := map[string]int{}        // by pattern
	composition := map[string]int{} // by name
	for i, t := range m.Transform {
		path := element("measures.transform", i)
		for j, pattern := range t.Match {
			if earlier, ok := rule[pattern]; ok && earlier != i {
				c.wrong(element(path+".match", j), fmt.Sprintf("`%s` is matched by an earlier rule of `measures.transform`", shorten(pattern)),
					"a measure has one scale: keep it in one rule")
				continue
			}
			rule[pattern] = i
		}
		if !c.ok(path+".as", path+".composition", path+".zeros") {
			continue
		}
		isRatio := t.As == ScaleCLR || t.As == ScaleILR
		switch {
		case isRatio && t.Composition == "":
			c.wrong(path+".as", fmt.Sprintf("`as: %s` needs the name of the whole whose parts are matched", t.As), "add `composition: NAME`")
		case !isRatio && t.Composition != "":
			c.wrong(path+".composition", fmt.Sprintf("`composition` means nothing with `as: %s`", t.As), "remove it, or write `as: clr`")
		case !isRatio && t.Zeros != 0:
			c.wrong(path+".zeros", fmt.Sprintf("`zeros` means nothing with `as: %s`", t.As), "remove it, or write `as: clr`")
		}
		if !isRatio || t.Composition == "" {
			continue
		}
		if _, ok := composition[t.Composition]; ok {
			c.wrong(path+".composition", fmt.Sprintf("two rules of `measures.transform` make the composition `%s`", shorten(t.Composition)),
				"all parts of one whole belong in one rule")
		}
		composition[t.Composition] = i
	}
}

func (c *checker) checkConfounds() {
	if !c.ok("confounds.use") {
		return
	}
	use := c.Confounds.Use
	inUse := func(path, name string) {
		if c.ok(path) && !slices.Contains(use, name) {
			c.wrong(path, fmt.Sprintf("`%s` is not in `confounds.use`", shorten(name)), c.addOr(name, use, "confounds.use"))
		}
	}
	for i, name := range c.Confounds.Squares {
		inUse(element("confounds.squares", i), name)
	}
	seen := map[[2]string]bool{}
	for i, pair := range c.Confounds.Products {
		path := element("confounds.products", i)
		if !c.ok(path) {
			continue
		}
		inUse(element(path, 0), pair[0])
		inUse(element(path, 1), pair[1])
		switch {
		case pair[0] == pair[1]:
			c.wrong(path, fmt.Sprintf("the product of `%s` with itself is its square", shorten(pair[0])), "write it in `confounds.squares`")
		case seen[[2]string{pair[1], pair[0]}]:
			c.wrong(path, "this product stands in `confounds.products` already, the other way round", "remove one of the two")
		}
		seen[pair] = true
	}
}

// addOr suggests the nearest name of a list in the study, or to add to it.
func (c *checker) addOr(name string, list []string, path string) string {
	if near := names.Nearest(name, list); near != "" {
		return "did you mean `" + near + "`?"
	}
	return "add it to `" + path + "`"
}

func (c *checker) checkPredict() {
	p := c.Predict
	if c.Measures == nil && c.ok("measures") {
		c.wrong("predict", "`predict` needs `measures`, from which traits are predicted", "add a section `measures`, or remove `predict`")
	}
	if c.Traits == nil && c.ok("traits") {
		c.wrong("predict", "`predict` needs `traits`, which are predicted", "add a section `traits`, or remove `predict`")
	}
	if c.Measures != nil && c.ok("measures.sets") {
		names := c.Measures.Sets.Names()
		for i, name := range p.Sets {
			if path := element("predict.sets", i); c.ok(path) && !slices.Contains(names, name) {
				c.wrong(path, fmt.Sprintf("`%s` is no set of `measures.sets`", shorten(name)), suggest(name, names, "sets: "))
			}
		}
	}
	if c.Traits != nil && c.ok("traits.use", "confounds.use") {
		for i, name := range c.Traits.Use {
			if slices.Contains(c.Confounds.Use, name) {
				c.wrong(element("traits.use", i), fmt.Sprintf("`%s` is a trait and a confound: nothing of it would be left to predict", shorten(name)),
					"remove it from `traits.use` or from `confounds.use`")
			}
		}
	}
	if q := p.Penalties; c.ok("predict.penalties.low", "predict.penalties.high") && q.Low >= q.High {
		path := "predict.penalties.low"
		if !c.Given(path) {
			path = "predict.penalties.high"
		}
		c.wrong(path, fmt.Sprintf("`predict.penalties.low` must be below `predict.penalties.high`, found %v and %v", q.Low, q.High), "")
	}
	if p.Metric == MetricRByFold && p.Outer.LeaveOut != "" && c.Given("predict.metric") && c.ok("predict.metric") {
		c.wrong("predict.metric", "`r_by_fold` has no value where one family is held out at a time", "write `metric: r2`")
	}
}

func (c *checker) checkHeritability() {
	h := c.Heritability
	given := map[Role]bool{
		RoleMeasures:  c.Measures != nil || !c.ok("measures"),
		RoleTraits:    c.Traits != nil || !c.ok("traits"),
		RoleConfounds: len(c.Confounds.Use) > 0 || !c.ok("confounds.use", "confounds"),
	}
	for i, role := range h.Of {
		if path := element("heritability.of", i); c.ok(path) && c.Given(path) && !given[role] {
			c.wrong(path, fmt.Sprintf("`heritability.of` names %s, and the study has none", role), "add them, or remove `"+string(role)+"` here")
		}
	}
	if c.ok("heritability.full", "heritability.models") && !slices.Contains(h.Models, h.Full) {
		c.wrong("heritability.models", fmt.Sprintf("`heritability.models` lacks `%s`, the model of the headline", h.Full),
			"add it, or choose another `heritability.full`")
	}
}
