package predict

import (
	"context"
	"fmt"
	"math"
	"testing"
)

// benchmarkProblem is 10 outer by 5 inner folds, 50 measures, 50 traits, 3
// confounds and 20 penalties.
func benchmarkProblem(people int, cells bool) problem {
	q := invent(shape{people: people, measures: 50, confounds: 3, traits: 50, repeats: 1, outer: 10, inner: 5, cells: cells}, 1)
	q.penalties = make([]float64, 20)
	for i := range q.penalties {
		q.penalties[i] = math.Pow(10, -1+6*float64(i)/19)
	}
	return q
}

var foldKinds = map[bool]string{true: "cells", false: "given"}

func BenchmarkNewDesign(b *testing.B) {
	for _, people := range []int{200, 1000, 5000} {
		b.Run(fmt.Sprintf("people=%d", people), func(b *testing.B) {
			q := benchmarkProblem(people, true)
			for b.Loop() {
				q.design(b, Options{})
			}
		})
	}
}

func BenchmarkFit(b *testing.B) {
	for _, people := range []int{200, 1000, 5000} {
		b.Run(fmt.Sprintf("people=%d", people), func(b *testing.B) {
			q := benchmarkProblem(people, true)
			d := q.design(b, Options{})
			for b.Loop() {
				if _, err := d.Fit(context.Background(), q.traits); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// A column is one trait in one arrangement.
func BenchmarkNull(b *testing.B) {
	const arrangements = 100
	for _, people := range []int{200, 1000, 5000} {
		for _, cells := range []bool{true, false} {
			b.Run(fmt.Sprintf("people=%d/folds=%s", people, foldKinds[cells]), func(b *testing.B) {
				q := benchmarkProblem(people, cells)
				d := q.design(b, Options{})
				residuals, err := Residuals(q.traits, q.confounds)
				if err != nil {
					b.Fatal(err)
				}
				for b.Loop() {
					if _, err := d.Null(context.Background(), residuals, drawn{arrangements, 3}, nil); err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*50*arrangements), "ns/column")
			})
		}
	}
}
