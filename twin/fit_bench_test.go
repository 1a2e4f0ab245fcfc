package twin

import (
	"fmt"
	"testing"
)

// benchmarkSample is a sample of twins with a sibling and a half-sibling and
// one covariate.
func benchmarkSample(b *testing.B, families int) *Sample {
	b.Helper()
	return twinsWithSiblings(1, families).sample(b)
}

// One evaluation with derivatives takes the same time for any number of
// families.
func BenchmarkLikelihood(b *testing.B) {
	for _, families := range []int{500, 5000, 50000} {
		b.Run(fmt.Sprintf("families=%d", families), func(b *testing.B) {
			lik := benchmarkSample(b, families).likelihood(ModelACE, ML)
			p := lik.newPoint()
			for b.Loop() {
				lik.at([]float64{0.3, 0.2}, p)
			}
		})
	}
}

func BenchmarkFit(b *testing.B) {
	for _, families := range []int{500, 5000} {
		b.Run(fmt.Sprintf("families=%d", families), func(b *testing.B) {
			s := benchmarkSample(b, families)
			for b.Loop() {
				if _, err := s.Fit(ModelACE, FitOptions{}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkInterval(b *testing.B) {
	s := benchmarkSample(b, 500)
	f := mustFit(b, s, ModelACE)
	for b.Loop() {
		if _, err := s.Interval(f, ShareA, 0.95); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkNewSample(b *testing.B) {
	f := twinsWithSiblings(1, 5000)
	for b.Loop() {
		f.sample(b)
	}
}

// Another variable of the same people costs their cross-products.
func BenchmarkWith(b *testing.B) {
	f := twinsWithSiblings(1, 5000)
	s := f.sample(b)
	for b.Loop() {
		if _, err := s.With(f.y, f.covariates, f.names); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkGalton(b *testing.B) {
	k, height, _ := galtonFamilies(b)
	s, err := NewSample(k, everyone(len(height)), height, nil, nil)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := s.Fit(ModelACE, FitOptions{}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkSpouses(b *testing.B) {
	k, height, _ := galtonFamilies(b)
	s, err := NewSample(k, everyone(len(height)), height, nil, nil)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := s.Correlation(Spouse, CorrelationOptions{Confidence: 0.95, Seed: 1}); err != nil {
			b.Fatal(err)
		}
	}
}
