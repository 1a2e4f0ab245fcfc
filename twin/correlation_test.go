package twin

import (
	"errors"
	"math"
	"slices"
	"testing"

	"kindwell/internal/stream"

	"gonum.org/v1/gonum/mat"
)

var confident = CorrelationOptions{Confidence: 0.95}

func mustCorrelate(t testing.TB, s *Sample, r Relation, opt CorrelationOptions) *Correlation {
	t.Helper()
	c, err := s.Correlation(r, opt)
	if err != nil {
		t.Fatalf("%s: %v", r, err)
	}
	return c
}

// Head lengths of 25 pairs of brothers (Frets 1921; data set frets of R's boot).
// For pairs the intraclass correlation by maximum likelihood is the
// double-entry one, .69456, not Pearson's .71075.
func TestBrothers(t *testing.T) {
	first := []float64{191, 195, 181, 183, 176, 208, 189, 197, 188, 192, 179, 183, 174, 190, 188, 163, 195, 186, 181, 175, 192, 174, 176, 197, 190}
	second := []float64{179, 201, 185, 188, 171, 192, 190, 189, 197, 187, 186, 174, 185, 195, 187, 161, 183, 173, 182, 165, 185, 178, 176, 200, 187}
	var y, mean []float64
	kinds, sizes := make([]byte, 25), make([]int, 25)
	for i := range first {
		kinds[i], sizes[i] = 's', 2
		y = append(y, first[i], second[i])
		mean = append(mean, first[i]+second[i])
	}
	s, err := NewSample(sibships(kinds, sizes), everyone(50), y, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	c := mustCorrelate(t, s, FullSibling, confident)
	near(t, "correlation", c.Value, .69456, 5.1e-6)
	if c.Pairs != 25 || c.Families != 25 || c.Bootstrap || c.Confidence != .95 {
		t.Errorf("%+v", c)
	}
	// Limits by bisection of the deviance in sums and differences of pairs.
	var m float64
	for _, v := range mean {
		m += v / 50
	}
	deviance := func(r float64) float64 {
		var ss float64
		for i := range first {
			sum, difference := first[i]+second[i]-2*m, first[i]-second[i]
			ss += sum*sum/(2*(1+r)) + difference*difference/(2*(1-r))
		}
		return 50*math.Log(ss) + 25*math.Log(1-r*r)
	}
	for _, end := range []float64{-1, 1} {
		inside, outside := c.Value, end
		for range 80 {
			middle := (inside + outside) / 2
			// 3.841458820694124 = qchisq(.95, 1) in R.
			if deviance(middle)-deviance(c.Value) < 3.841458820694124 {
				inside = middle
			} else {
				outside = middle
			}
		}
		got := c.Low
		if end > 0 {
			got = c.High
		}
		near(t, "limit", got, inside, 1e-9)
	}
}

// Twin correlations of exact data are what they were made to be, each apart
// from the other's variance.
func TestExactTwinCorrelations(t *testing.T) {
	s := twinPairs(t, 60, 50, [3]float64{2, 1.2, 2}, [3]float64{3, .6, 3})
	near(t, "MZ", mustCorrelate(t, s, MZ, confident).Value, .6, 1e-9)
	dz := mustCorrelate(t, s, DZOppositeSex, confident)
	near(t, "DZ", dz.Value, .2, 1e-9)
	if dz.Pairs != 50 {
		t.Errorf("%d opposite-sex pairs, want 50", dz.Pairs)
	}
	var few *TooFewError
	none, err := s.Correlation(DZSameSex, confident)
	if !errors.As(err, &few) || few.Have != 0 || few.Need != 3 {
		t.Errorf("no such pairs: error %v", err)
	}
	if none.Pairs != 0 || !math.IsNaN(none.Value) || !math.IsNaN(none.Low) || !math.IsNaN(none.High) {
		t.Errorf("no such pairs: %+v", none)
	}
}

// Whole sibships of up to 15 by closed form in base R, parents and children and
// spouses by their residuals (testdata/galton/make.R). The correlation of
// spouses is the known .0969.
func TestGaltonCorrelations(t *testing.T) {
	k, height, male := galtonFamilies(t)
	n := len(height)
	s, err := NewSample(k, everyone(n), height, mat.NewDense(n, 1, male), []string{"male"})
	if err != nil {
		t.Fatal(err)
	}
	relations := map[string]Relation{"full_sibling": FullSibling, "parent_child": ParentChild, "spouse": Spouse}
	for _, r := range readTable(t, "galton", "correlations.csv") {
		name := r["relation"]
		c := mustCorrelate(t, s, relations[name], CorrelationOptions{Confidence: .95, Seed: 7})
		near(t, name, c.Value, r.number(t, "correlation"), 1e-9)
		if c.Pairs != int(r.number(t, "pairs")) || c.Families != int(r.number(t, "families")) {
			t.Errorf("%s: %d pairs in %d families, want %s in %s", name, c.Pairs, c.Families, r["pairs"], r["families"])
		}
		if c.Bootstrap != (name != "full_sibling") {
			t.Errorf("%s: bootstrap %v", name, c.Bootstrap)
		}
		if !c.Bootstrap {
			near(t, name+" low", c.Low, r.number(t, "low"), 1e-9)
			near(t, name+" high", c.High, r.number(t, "high"), 1e-9)
		}
	}
	near(t, "spouses", mustCorrelate(t, s, Spouse, confident).Value, .0969, 5e-5)

	// Couples are independent, so that their bootstrap lies near the interval
	// of Fisher's z.
	c := mustCorrelate(t, s, Spouse, CorrelationOptions{Confidence: .95, Seed: 1, Replicates: 4000})
	z, half := math.Atanh(c.Value), 1.959964/math.Sqrt(205-3)
	near(t, "low", c.Low, math.Tanh(z-half), .03)
	near(t, "high", c.High, math.Tanh(z+half), .03)
	again := mustCorrelate(t, s, Spouse, CorrelationOptions{Confidence: .95, Seed: 1, Replicates: 4000})
	other := mustCorrelate(t, s, Spouse, CorrelationOptions{Confidence: .95, Seed: 2, Replicates: 4000})
	if *again != *c {
		t.Error("the same seed gave another interval")
	}
	if other.Low == c.Low && other.High == c.High {
		t.Error("another seed gave the same interval")
	}
	if narrow := mustCorrelate(t, s, Spouse, CorrelationOptions{Confidence: .8, Seed: 1, Replicates: 4000}); !(narrow.Low > c.Low && narrow.High < c.High) {
		t.Errorf("80 %% interval %+v is not inside the 95 %% one", narrow)
	}
}

// twinsWithSiblings is a sample of families with two twins, a sibling and a
// half-sibling; MZ, same-sex DZ and opposite-sex DZ twins take turns.
func twinsWithSiblings(seed uint64, families int) familySample {
	draw := stream.New(seed, "twins with siblings")
	f := familySample{kin: &tableKin{}, names: []string{"age"}}
	const room = 1 << 20
	var ages []float64
	for n := range families {
		mother, father := room+3*n, room+3*n+1
		f.kin.add(n, mother, father, n, n%3 == 0, false)
		f.kin.add(n, mother, father, n, n%3 == 0, n%3 == 2)
		f.kin.add(n, mother, father, -1, false, false)
		f.kin.add(n, mother, room+3*n+2, -1, false, true)
		home, genes := draw.Norm(), draw.Norm()
		for c := range 4 {
			if n%3 > 0 || c > 1 {
				genes = (genes + draw.Norm()) / math.Sqrt2
			}
			age := 20 + 10*draw.Float64()
			ages = append(ages, age)
			f.y = append(f.y, home+genes+draw.Norm()+0.05*age)
		}
	}
	f.covariates = mat.NewDense(len(f.y), 1, ages)
	return f
}

// Sibships that mix relations: correlation and limits against a search over a
// dense likelihood of the same people, all correlations free.
func TestCorrelationByDenseRoute(t *testing.T) {
	f := twinsWithSiblings(11, 36)
	s := f.sample(t)
	for _, r := range []Relation{FullSibling, HalfSibling} {
		c := mustCorrelate(t, s, r, confident)
		// People with such a relative, and which correlation each pair has.
		var who []int
		for i := range f.y {
			for j := range f.y {
				if f.kin.Family(i) == f.kin.Family(j) && f.kin.Relation(i, j) == r {
					who = append(who, i)
					break
				}
			}
		}
		if r == FullSibling && (c.Pairs != 2*36 || c.Families != 36) || r == HalfSibling && (c.Pairs != 3*36 || c.Families != 36) {
			t.Errorf("%s: %d pairs in %d families", r, c.Pairs, c.Families)
		}
		relations := []Relation{r}
		for _, i := range who {
			for _, j := range who {
				if i != j && f.kin.Family(i) == f.kin.Family(j) {
					if o := f.kin.Relation(i, j); siblings(o) && !slices.Contains(relations, o) {
						relations = append(relations, o)
					}
				}
			}
		}
		x := mat.NewDense(len(who), 2, nil)
		y := mat.NewVecDense(len(who), nil)
		for a, i := range who {
			x.SetRow(a, append([]float64{1}, f.covariates.RawRowView(i)...))
			y.SetVec(a, f.y[i])
		}
		deviance := func(correlation []float64) float64 {
			v := mat.NewSymDense(len(who), nil)
			for a, i := range who {
				v.SetSym(a, a, 1)
				for b := a + 1; b < len(who); b++ {
					if j := who[b]; f.kin.Family(i) == f.kin.Family(j) {
						if at := slices.Index(relations, f.kin.Relation(i, j)); at >= 0 {
							v.SetSym(a, b, correlation[at])
						}
					}
				}
			}
			var chol mat.Cholesky
			if !chol.Factorize(v) {
				return math.Inf(1)
			}
			var vx, xvx mat.Dense
			var vy, xvy, beta mat.VecDense
			if chol.SolveTo(&vx, x) != nil || chol.SolveVecTo(&vy, y) != nil {
				return math.Inf(1)
			}
			xvx.Mul(x.T(), &vx)
			xvy.MulVec(vx.T(), y)
			if err := beta.SolveVec(&xvx, &xvy); err != nil {
				panic(err)
			}
			ss := mat.Dot(y, &vy) - mat.Dot(&xvy, &beta)
			return float64(len(who))*math.Log(ss) + chol.LogDet()
		}
		least := func(fixed func(free []float64) []float64, free []float64) float64 {
			if len(free) == 0 {
				return deviance(fixed(nil))
			}
			return lowest(func(x []float64) float64 { return deviance(fixed(x)) }, free)
		}
		start := make([]float64, len(relations))
		for k := range start {
			start[k] = 0.3
		}
		all := least(func(x []float64) []float64 { return x }, start)
		at := func(r float64) float64 {
			// All alike is positive definite, so a start.
			for k := range start {
				start[k] = max(0.3, r)
			}
			return least(func(x []float64) []float64 { return append([]float64{r}, x...) }, start[1:]) - all
		}
		near(t, r.String(), at(c.Value), 0, 1e-6)
		near(t, r.String()+" low", at(c.Low), 3.841458820694124, 1e-5)
		near(t, r.String()+" high", at(c.High), 3.841458820694124, 1e-5)
	}
}

// lowest minimises f from x by Newton's method on differences, damped until it
// goes down.
func lowest(f func([]float64) float64, x []float64) float64 {
	const h = 1e-3
	n := len(x)
	x = slices.Clone(x)
	moved := func(steps ...int) float64 { // +(i+1) or -(i+1): one h along i
		y := slices.Clone(x)
		for _, s := range steps {
			if s > 0 {
				y[s-1] += h
			} else {
				y[-s-1] -= h
			}
		}
		return f(y)
	}
	value := f(x)
	for range 40 {
		g, hess := mat.NewVecDense(n, nil), mat.NewDense(n, n, nil)
		for i := range n {
			g.SetVec(i, (moved(i+1)-moved(-i-1))/(2*h))
			for j := range i + 1 {
				v := (moved(i+1, j+1) - moved(i+1, -j-1) - moved(-i-1, j+1) + moved(-i-1, -j-1)) / (4 * h * h)
				hess.Set(i, j, v)
				hess.Set(j, i, v)
			}
		}
		better := false
		for damp := 0.0; damp < 1e9 && !better; damp = 10*damp + 1 {
			var step mat.VecDense
			damped := mat.DenseCopyOf(hess)
			for i := range n {
				damped.Set(i, i, hess.At(i, i)+damp)
			}
			if err := step.SolveVec(damped, g); err != nil {
				continue
			}
			y := slices.Clone(x)
			for i := range y {
				y[i] -= step.AtVec(i)
			}
			if v := f(y); v < value {
				x, value, better = y, v, true
			}
		}
		if !better {
			break
		}
	}
	return value
}

// A relation beside the asked one that few families have cannot have a
// correlation of its own: the likelihood would run away with it. Both people of
// such a pair are left out, as if they had never been there, in any order.
func TestRareRelationsAreLeftOut(t *testing.T) {
	f := twinsWithSiblings(13, 36)
	var rows []int
	for i := range f.y {
		// MZ twins stay whole in four families of twelve.
		if f.kin.family[i]%3 == 0 && i%4 == 1 && f.kin.family[i] >= 12 {
			continue
		}
		rows = append(rows, i)
	}
	part := func(rows []int) *Sample {
		y := make([]float64, len(rows))
		for at, r := range rows {
			y[at] = f.y[r]
		}
		s, err := NewSample(f.kin, rows, y, nil, nil)
		if err != nil {
			t.Fatal(err)
		}
		return s
	}
	all := mustCorrelate(t, part(rows), FullSibling, confident)
	slices.Reverse(rows)
	backward := mustCorrelate(t, part(rows), FullSibling, confident)
	near(t, "correlation in another order", backward.Value, all.Value, 1e-9)
	slices.Reverse(rows)
	rows = slices.DeleteFunc(rows, func(i int) bool {
		return f.kin.family[i]%3 == 0 && (i%4 == 1 || i%4 == 0 && f.kin.family[i] < 12)
	})
	apart := mustCorrelate(t, part(rows), FullSibling, confident)
	if all.Pairs != apart.Pairs || all.Families != apart.Families {
		t.Errorf("%+v, want %+v", all, apart)
	}
	near(t, "correlation", all.Value, apart.Value, 1e-9)
	near(t, "low", all.Low, apart.Low, 1e-9)
}

// renamed calls fraternal twins of opposite sex so below a family, and of the
// same sex from there on.
type renamed struct {
	*tableKin
	below int
}

func (k renamed) Relation(i, j int) Relation {
	r := k.tableKin.Relation(i, j)
	if r == DZOppositeSex && k.family[i] >= k.below {
		return DZSameSex
	}
	return r
}

// Fraternal twins of opposite sex in few families share the correlation of
// those of the same sex: everybody stays, and the order does not matter.
func TestRareTwinsShareACorrelation(t *testing.T) {
	f := twinsWithSiblings(13, 60)
	correlate := func(below int, rows []int) *Correlation {
		y := make([]float64, len(rows))
		for at, r := range rows {
			y[at] = f.y[r]
		}
		s, err := NewSample(renamed{f.kin, below}, rows, y, nil, nil)
		if err != nil {
			t.Fatal(err)
		}
		return mustCorrelate(t, s, FullSibling, confident)
	}
	rows := upTo(len(f.y))
	few, one, many := correlate(9, rows), correlate(0, rows), correlate(60, rows)
	slices.Reverse(rows)
	backward := correlate(9, rows)
	near(t, "in another order", backward.Value, few.Value, 1e-9)
	near(t, "as one kind", few.Value, one.Value, 1e-9)
	if few.Pairs != one.Pairs || few.Families != one.Families {
		t.Errorf("%+v, want %+v", few, one)
	}
	if math.Abs(many.Value-one.Value) < 1e-6 {
		t.Errorf("kinds with correlations of their own change nothing: %v", many.Value)
	}
}

// Taking all pairs of a sibship for independent makes intervals too narrow:
// among 60 sibships of 4 they cover .80 instead of .95. Whole sibships do not.
func TestCorrelationCovers(t *testing.T) {
	if testing.Short() {
		t.Skip("simulation")
	}
	kinds, sizes := make([]byte, 60), make([]int, 60)
	for i := range kinds {
		kinds[i], sizes[i] = 's', 4
	}
	k := sibships(kinds, sizes)
	y := make([]float64, 240)
	for i := range y {
		y[i] = float64(i)
	}
	people, err := NewSample(k, everyone(240), y, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	const runs, truth = 600, .4
	covered := 0.0
	for run := range runs {
		draw := stream.New(12, "coverage", uint64(run))
		var shared float64
		for i := range y {
			if i%4 == 0 {
				shared = math.Sqrt(truth) * draw.Norm()
			}
			y[i] = shared + math.Sqrt(1-truth)*draw.Norm()
		}
		s, err := people.With(y, nil, nil)
		if err != nil {
			t.Fatal(err)
		}
		if c := mustCorrelate(t, s, FullSibling, confident); c.Low <= truth && truth <= c.High {
			covered++
		}
	}
	near(t, "coverage", covered/runs, .95, .027) // three standard errors
}

func TestPercentiles(t *testing.T) {
	// quantile(c(1, 2, 4, 8, 16), c(.1, .9)) in R 4.2.2: 1.4, 12.8.
	low, high := percentiles([]float64{16, 1, 4, 2, 8}, .8)
	near(t, "low", low, 1.4, 1e-12)
	near(t, "high", high, 12.8, 1e-12)
}
