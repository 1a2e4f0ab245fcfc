package twin

import (
	"errors"
	"math"
	"slices"
	"testing"

	"kindwell/internal/stream"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// mixedFamilies is a sample of many shapes: twins of both kinds, with and
// without siblings, lone people, large sibships, half-siblings, and parents.
// It returns the pieces, so that tests can rearrange them.
type familySample struct {
	kin        *tableKin
	y          []float64
	covariates *mat.Dense
	names      []string
}

func mixedFamilies(seed uint64, families int, largest int) familySample {
	draw := stream.New(seed, "mixed families")
	k := &tableKin{}
	const room = 1 << 20 // ids from here on are founders outside the table
	for f := range families {
		mother, father := room+3*f, room+3*f+1
		if draw.IntN(3) == 0 {
			mother = k.add(f, -1, -1, -1, false, false)
			if draw.IntN(2) == 0 {
				father = k.add(f, -1, -1, -1, false, true)
			}
		}
		set, mz := -1, draw.IntN(2) == 0
		first := len(k.family)
		size := 1 + draw.IntN(largest)
		if size > 1 && draw.IntN(4) > 0 {
			set = f
		}
		for c := range size {
			own := -1
			if set >= 0 && c < 2 {
				own = set
			}
			k.add(f, mother, father, own, mz && own >= 0, draw.IntN(2) == 0)
		}
		if mz && set >= 0 {
			k.male[first+1] = k.male[first]
		}
		if draw.IntN(4) == 0 {
			k.add(f, mother, room+3*f+2, -1, false, draw.IntN(2) == 0) // half-sibling
		}
	}
	n := len(k.family)
	s := familySample{kin: k, names: []string{"age", "sex", "motion"}}
	s.covariates = mat.NewDense(n, 3, nil)
	shared := map[int]float64{}
	for i := range n {
		f := k.family[i]
		if _, ok := shared[f]; !ok {
			shared[f] = draw.Norm()
		}
		age := 30 + 5*draw.Norm()
		sex := 0.0
		if k.male[i] {
			sex = 1
		}
		s.covariates.SetRow(i, []float64{age, sex, 0.1 + 0.02*draw.Norm()})
		s.y = append(s.y, 170+3*sex-0.1*age+4*shared[f]+5*draw.Norm())
	}
	return s
}

func (f familySample) sample(t testing.TB) *Sample {
	t.Helper()
	s, err := NewSample(f.kin, everyone(len(f.y)), f.y, f.covariates, f.names)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// component is one component matrix over all people, without structures.
func (f familySample) component(c Component) *mat.SymDense {
	n := len(f.y)
	m := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			if f.kin.Family(i) != f.kin.Family(j) {
				continue
			}
			var v float64
			switch c {
			case A:
				v = f.kin.Kinship(i, j)
			case C:
				if f.kin.SharedHome(i, j) {
					v = 1
				}
			case D:
				v = f.kin.Dominance(i, j)
			case E:
				if i == j {
					v = 1
				}
			}
			m.SetSym(i, j, v)
		}
	}
	return m
}

// denseLogLik is the second route: one multivariate normal density of all
// people, covariates as they are, at given variances and coefficients that it
// finds by generalised least squares with gonum's Cholesky. The restricted one
// is the density of the contrasts that leave the mean out.
func (f familySample) denseLogLik(model Model, variances []float64, criterion Criterion) (logLik float64, beta []float64) {
	n := len(f.y)
	v := mat.NewSymDense(n, nil)
	for k, c := range model.Components() {
		var scaled mat.SymDense
		scaled.ScaleSym(variances[k], f.component(c))
		v.AddSym(v, &scaled)
	}
	_, q := f.covariates.Dims()
	x := mat.NewDense(n, q+1, nil)
	for i := range n {
		x.Set(i, 0, 1)
		for j := range q {
			x.Set(i, j+1, f.covariates.At(i, j))
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(v) {
		return math.NaN(), nil
	}
	var solved, xvx mat.Dense
	if err := chol.SolveTo(&solved, x); err != nil {
		panic(err)
	}
	xvx.Mul(x.T(), &solved)
	y := mat.NewVecDense(n, f.y)
	var right, b, fitted, rest, vr mat.VecDense
	right.MulVec(solved.T(), y)
	if err := b.SolveVec(&xvx, &right); err != nil {
		panic(err)
	}
	fitted.MulVec(x, &b)
	rest.SubVec(y, &fitted)
	if err := chol.SolveVecTo(&vr, &rest); err != nil {
		panic(err)
	}
	logLik = -0.5 * (float64(n)*math.Log(2*math.Pi) + chol.LogDet() + mat.Dot(&rest, &vr))
	if criterion == REML {
		logLik += 0.5*float64(q+1)*math.Log(2*math.Pi) - 0.5*math.Log(mat.Det(&xvx))
	}
	return logLik, b.RawVector().Data
}

func TestLikelihoodByDenseRoute(t *testing.T) {
	for _, c := range []struct {
		name     string
		families int
		largest  int
		models   []Model
	}{
		{"small families", 60, 5, []Model{ModelE, ModelAE, ModelCE, ModelACE, ModelADE}},
		// Sizes beyond the plain loops, and structures of one family, whose
		// cross-products are not kept.
		{"large families", 8, 40, []Model{ModelACE}},
	} {
		f := mixedFamilies(1, c.families, c.largest)
		s := f.sample(t)
		for _, model := range c.models {
			for _, criterion := range []Criterion{ML, REML} {
				t.Run(c.name+" "+model.String()+" "+criterion.String(), func(t *testing.T) {
					checkByDenseRoute(t, f, s, model, criterion)
				})
			}
		}
	}
}

func checkByDenseRoute(t *testing.T, f familySample, s *Sample, model Model, criterion Criterion) {
	fit, err := s.Fit(model, FitOptions{Criterion: criterion})
	if err != nil {
		t.Fatal(err)
	}
	var variances []float64
	for _, e := range fit.Components {
		variances = append(variances, e.Variance)
	}
	want, beta := f.denseLogLik(model, variances, criterion)
	near(t, "log-likelihood", fit.LogLik, want, 1e-10*math.Abs(want))
	for j, b := range beta {
		near(t, fit.Fixed[j].Term, fit.Fixed[j].Estimate, b, 1e-7*(1+math.Abs(b)))
	}
	// It is a maximum: steps to either side in any variance go down.
	for k := range variances {
		for _, step := range []float64{-1e-2, 1e-2} {
			v := slices.Clone(variances)
			v[k] += step * fit.Total
			if v[k] < 0 {
				continue
			}
			if beside, _ := f.denseLogLik(model, v, criterion); !(beside < fit.LogLik) {
				t.Errorf("higher at %v (%.10g) than at the fit (%.10g)", v, beside, fit.LogLik)
			}
		}
	}
}

func TestDerivatives(t *testing.T) {
	f := mixedFamilies(2, 40, 6)
	s := f.sample(t)
	for _, criterion := range []Criterion{ML, REML} {
		for _, theta := range [][]float64{
			{0.3, 0.2}, {0.05, 0.6}, {-0.1, 0.1},
			// With all weights off the diagonal at 0 their derivatives are not.
			{0, 0}, {0.3, 0}, {0, 0.3},
		} {
			lik := s.likelihood(ModelACE, criterion)
			p := lik.newPoint()
			if !lik.at(theta, p) {
				t.Fatalf("not positive definite at %v", theta)
			}
			gradient, hessian := slices.Clone(p.gradient), slices.Clone(p.hessian)
			const h = 1e-5
			for k := range theta {
				var deviance [2]float64
				var slope [2][]float64
				for side, sign := range []float64{-1, 1} {
					moved := slices.Clone(theta)
					moved[k] += sign * h
					if !lik.at(moved, p) {
						t.Fatal("not positive definite beside")
					}
					deviance[side], slope[side] = p.deviance, slices.Clone(p.gradient)
				}
				scale := float64(s.People())
				near(t, "gradient", gradient[k], (deviance[1]-deviance[0])/(2*h), 1e-7*scale)
				for j := range theta {
					near(t, "hessian", hessian[k*len(theta)+j], (slope[1][j]-slope[0][j])/(2*h), 1e-7*scale)
				}
			}
		}
	}
}

// Keeping cross-products by orbit must not change them: every product of
// component matrices and inverses is constant on an orbit.
func TestOrbitsAreConstant(t *testing.T) {
	l := mixedFamilies(3, 400, 4).sample(t)
	shared := 0
	for _, s := range l.layout.structures {
		k := s.size
		if s.orbits < packed(k) {
			shared++
		}
		v := make([]float64, k*k)
		b := make([]float64, k*k)
		for at, kind := range s.kind {
			e := l.layout.kinds[kind]
			v[at] = 0.31*e[placeA] + 0.17*e[placeC] - 0.05*e[placeD]
			b[at] = e[placeC]
		}
		for i := range k {
			v[i*k+i]++
		}
		invert(v, k)
		p, d := make([]float64, k*k), make([]float64, k*k)
		multiply(p, v, b, k)
		multiply(d, p, v, k)
		for i := range k {
			for j := range k {
				r := s.pair[s.orbit[i*k+j]]
				near(t, "inverse on an orbit", v[i*k+j], v[r[0]*k+r[1]], 1e-12)
				near(t, "derivative on an orbit", d[i*k+j], d[r[0]*k+r[1]], 1e-12)
			}
		}
	}
	if shared == 0 {
		t.Error("no structure has an orbit of more than one pair")
	}
}

func TestStructuresOfSibships(t *testing.T) {
	// Two twins, or two twins and a sibling, however their rows are shuffled:
	// MZ pair, DZ pair, MZ + sibling, DZ + sibling (three alike), single.
	rapid.Check(t, func(r *rapid.T) {
		kinds := []byte("mmddmmdds")
		sizes := []int{2, 2, 2, 2, 3, 3, 3, 3, 1}
		k := sibships(kinds, sizes)
		rows := rapid.Permutation(everyone(len(k.family))).Draw(r, "rows")
		y := make([]float64, len(rows))
		for i := range y {
			y[i] = float64(i)
		}
		s, err := NewSample(k, rows, y, nil, nil)
		if err != nil {
			r.Fatal(err)
		}
		if s.Structures() != 5 {
			r.Fatalf("%d structures, want 5", s.Structures())
		}
	})
}

// Two families of two MZ pairs each: no member differs from any other by what
// it is to the rest, yet orders differ. And a person without relatives present
// is a block of one, whatever the family.
func TestCanonicalOrder(t *testing.T) {
	k := &tableKin{}
	const room = 1000
	for f := range 3 {
		order := [][]int{{0, 0, 1, 1}, {0, 1, 0, 1}, {1, 0, 0, 1}}[f]
		for _, set := range order {
			k.add(f, room+2*f, room+2*f+1, 10*f+set, true, false)
		}
		k.add(f, -1, -1, -1, false, true) // a stepfather
	}
	y := make([]float64, len(k.family))
	for i := range y {
		y[i] = float64(i * i % 7)
	}
	s, err := NewSample(k, everyone(len(y)), y, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	if s.Structures() != 2 || s.Families() != 3 {
		t.Errorf("%d structures in %d families, want 2 in 3", s.Structures(), s.Families())
	}
}

func TestInvariance(t *testing.T) {
	f := mixedFamilies(4, 60, 5)
	base := mustFit(t, f.sample(t), ModelACE)
	n := len(f.y)

	t.Run("order of rows", func(t *testing.T) {
		rows := make([]int, n)
		stream.New(5, "order").PermTo(rows)
		y := make([]float64, n)
		x := mat.NewDense(n, 3, nil)
		for i, r := range rows {
			y[i] = f.y[r]
			x.SetRow(i, f.covariates.RawRowView(r))
		}
		s, err := NewSample(f.kin, rows, y, x, f.names)
		if err != nil {
			t.Fatal(err)
		}
		other := mustFit(t, s, ModelACE)
		near(t, "log-likelihood", other.LogLik, base.LogLik, 1e-9)
		for k := range base.Components {
			near(t, "share", other.Components[k].Share, base.Components[k].Share, 1e-9)
		}
	})
	t.Run("scale of the variable", func(t *testing.T) {
		y := make([]float64, n)
		const scale, shift = 1e-3, 50.0
		for i := range y {
			y[i] = shift + scale*f.y[i]
		}
		s, err := NewSample(f.kin, everyone(n), y, f.covariates, f.names)
		if err != nil {
			t.Fatal(err)
		}
		other := mustFit(t, s, ModelACE)
		near(t, "log-likelihood", other.LogLik, base.LogLik-float64(n)*math.Log(scale), 1e-7)
		near(t, "total", other.Total, base.Total*scale*scale, 1e-9*other.Total)
		for k := range base.Components {
			near(t, "share", other.Components[k].Share, base.Components[k].Share, 1e-8)
		}
	})
	t.Run("scale of covariates", func(t *testing.T) {
		x := mat.DenseCopyOf(f.covariates)
		for i := range n {
			x.Set(i, 0, 1900+x.At(i, 0))
			x.Set(i, 2, 1e5*x.At(i, 2))
		}
		s, err := NewSample(f.kin, everyone(n), f.y, x, f.names)
		if err != nil {
			t.Fatal(err)
		}
		other := mustFit(t, s, ModelACE)
		near(t, "log-likelihood", other.LogLik, base.LogLik, 1e-8)
		near(t, "slope", other.Fixed[3].Estimate*1e5, base.Fixed[3].Estimate, 1e-6)
		near(t, "standard error", other.Fixed[3].SE*1e5, base.Fixed[3].SE, 1e-6)
		near(t, "intercept", other.Fixed[0].Estimate, base.Fixed[0].Estimate-1900*base.Fixed[1].Estimate, 1e-6)
	})
	t.Run("inputs are left alone", func(t *testing.T) {
		y, x := slices.Clone(f.y), mat.DenseCopyOf(f.covariates)
		mustFit(t, f.sample(t), ModelADE)
		if !slices.Equal(y, f.y) || !mat.Equal(x, f.covariates) {
			t.Error("an input was changed")
		}
	})
	t.Run("another variable of the same people", func(t *testing.T) {
		s := f.sample(t)
		doubled := make([]float64, n)
		for i := range doubled {
			doubled[i] = 2 * f.y[i]
		}
		other, err := s.With(doubled, nil, nil)
		if err != nil {
			t.Fatal(err)
		}
		direct, err := NewSample(f.kin, everyone(n), doubled, nil, nil)
		if err != nil {
			t.Fatal(err)
		}
		if a, b := mustFit(t, other, ModelACE), mustFit(t, direct, ModelACE); a.LogLik != b.LogLik {
			t.Errorf("log-likelihood %v of With, %v of NewSample", a.LogLik, b.LogLik)
		}
		if again := mustFit(t, s, ModelACE); again.LogLik != base.LogLik {
			t.Error("With changed the sample it was made from")
		}
	})
}

func TestCovariatesThatSayNothing(t *testing.T) {
	f := mixedFamilies(6, 50, 4)
	base := mustFit(t, f.sample(t), ModelACE)
	n := len(f.y)
	x := mat.NewDense(n, 5, nil)
	for i := range n {
		r := f.covariates.RawRowView(i)
		x.SetRow(i, []float64{r[0], 7, r[1], r[0]*3 - 2*r[1] + 5, r[2]})
	}
	s, err := NewSample(f.kin, everyone(n), f.y, x, []string{"age", "site", "sex", "mix", "motion"})
	if err != nil {
		t.Fatal(err)
	}
	fit := mustFit(t, s, ModelACE)
	near(t, "log-likelihood", fit.LogLik, base.LogLik, 1e-9)
	if fit.Parameters != base.Parameters {
		t.Errorf("%d parameters, want %d", fit.Parameters, base.Parameters)
	}
	for _, c := range []struct {
		at      int
		dropped string
	}{{2, "constant"}, {4, "a combination of the constant and earlier covariates"}} {
		e := fit.Fixed[c.at]
		if e.Dropped != c.dropped || !math.IsNaN(e.Estimate) || !math.IsNaN(e.SE) {
			t.Errorf("%s: %+v, want dropped as %q", e.Term, e, c.dropped)
		}
	}
	near(t, "age", fit.Fixed[1].Estimate, base.Fixed[1].Estimate, 1e-9)
	near(t, "motion", fit.Fixed[5].Estimate, base.Fixed[3].Estimate, 1e-9)
}

func TestErrors(t *testing.T) {
	pairs := func(kinds string, y ...float64) (*Sample, error) {
		sizes := make([]int, len(kinds))
		for i := range sizes {
			sizes[i] = 2
		}
		k := sibships([]byte(kinds), sizes)
		return NewSample(k, everyone(len(y)), y, nil, nil)
	}
	fit := func(m Model) func(*Sample, error) error {
		return func(s *Sample, err error) error {
			if err != nil {
				return err
			}
			_, err = s.Fit(m, FitOptions{})
			return err
		}
	}
	for _, c := range []struct {
		name string
		err  error
		want string
	}{
		{"constant variable", fit(ModelACE)(pairs("mmdd", 3, 3, 3, 3, 3, 3, 3, 3)),
			"the variable has no variance that its covariates leave over"},
		{"two families", fit(ModelACE)(pairs("md", 1, 2, 3, 5)),
			"2 families, need at least 3"},
		{"missing value", fit(ModelACE)(pairs("mmdd", 1, 2, 3, math.NaN(), 5, 6, 7, 9)),
			"row 3: the variable is missing or infinite"},
		{"MZ pairs only", fit(ModelACE)(pairs("mmmm", 1, 2, 3, 5, 5, 6, 7, 9)),
			"model ACE: no pairs in this sample tell A and C apart"},
		{"DZ pairs only", fit(ModelACE)(pairs("dddd", 1, 2, 3, 5, 5, 6, 7, 9)),
			"model ACE: no pairs in this sample tell A, C and E apart"},
		{"DZ pairs only, dominance", fit(ModelADE)(pairs("dddd", 1, 2, 3, 5, 5, 6, 7, 9)),
			"model ADE: no pairs in this sample tell A, D and E apart"},
		{"equal MZ twins", fit(ModelAE)(pairs("mmmdd", 1, 1, 5, 5, 2, 2, 6, 7, 8, 6)),
			"the likelihood has no maximum: relatives have equal values throughout"},
	} {
		if c.err == nil || c.err.Error() != c.want {
			t.Errorf("%s: error %v, want %q", c.name, c.err, c.want)
		}
	}

	k := &tableKin{}
	for f := range 5 {
		k.add(f, -1, -1, -1, false, false)
	}
	s, err := NewSample(k, everyone(5), []float64{1, 2, 4, 7, 5}, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	_, err = s.Fit(ModelAE, FitOptions{})
	var u *UnidentifiedError
	if !errors.As(err, &u) || !slices.Equal(u.Components, []Component{A, E}) {
		t.Errorf("no relatives: error %v, want A and E not told apart", err)
	}
	// Indicators of families take all that C explains.
	n := 8
	x := mat.NewDense(n, 3, nil)
	for i := range n {
		if f := i / 2; f > 0 {
			x.Set(i, f-1, 1)
		}
	}
	s, err = NewSample(sibships([]byte("mmdd"), []int{2, 2, 2, 2}), everyone(n), []float64{1, 2, 4, 7, 5, 9, 8, 4}, x, []string{"f2", "f3", "f4"})
	if err != nil {
		t.Fatal(err)
	}
	_, err = s.Fit(ModelCE, FitOptions{})
	if want := "model CE: the fixed effects leave nothing to tell C by"; err == nil || err.Error() != want {
		t.Errorf("families as covariates: error %v, want %q", err, want)
	}
	x.Set(5, 1, math.Inf(1))
	_, err = NewSample(sibships([]byte("mmdd"), []int{2, 2, 2, 2}), everyone(n), []float64{1, 2, 4, 7, 5, 9, 8, 4}, x, []string{"f2", "f3", "f4"})
	var missing *NotFiniteError
	if !errors.As(err, &missing) || missing.Column != "f3" || missing.Row != 5 {
		t.Errorf("infinite covariate: error %v, want f3 in row 5", err)
	}
}
