package study

import (
	"math"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"kindwell/cmd/kindwell/internal/study/config"
)

// rankStudy puts the dwell time on normal scores of ranks.
var rankStudy = strings.Replace(wholeStudy, "match: [dwell_s], as: log", "match: [dwell_s], as: rank_normal", 1)

// TestRankNormalInAStudy: the scale reaches predictions and variances. The
// scores differ from those of logarithms, but not by much.
func TestRankNormalInAStudy(t *testing.T) {
	dir := cohortFiles(t, 36)
	ranked := runStudy(t, writeStudy(t, dir, rankStudy), 2)
	plain := runStudy(t, writeStudy(t, dir, wholeStudy), 2)
	find := func(r *Results, trait, metric string) float64 {
		for _, s := range r.PredictionScores {
			if s.Trait == trait && s.Set == "dwell" && s.Metric == metric {
				return s.Value
			}
		}
		t.Fatalf("no score %s of %s", metric, trait)
		return 0
	}
	if a, b := find(ranked, "mood", "r2"), find(plain, "mood", "r2"); math.Abs(a-b) < 1e-6 || math.Abs(a-b) > 0.2 {
		t.Errorf("r2 %v with ranks, %v without", a, b)
	}
	for _, h := range ranked.Heritability {
		if h.Variable == "dwell_s" && (h.Transform != "rank_normal" || !(h.Familial > 0.3)) {
			t.Errorf("dwell_s: %+v", h)
		}
	}
}

// TestRankScalerLearnsFromTrainingAlone: five training values have the scores
// of Blom's formula, and held-out values lie between or are clipped.
func TestRankScalerLearnsFromTrainingAlone(t *testing.T) {
	training, held := rankScaler([]float64{3, 1, 2, 5, 4}, []float64{2.5, 0, 9, math.NaN()})
	score := func(rank float64) float64 { return distuv.UnitNormal.Quantile((rank - 0.375) / 5.25) }
	for i, want := range []float64{score(3), score(1), score(2), score(5), score(4)} {
		if math.Abs(training[i]-want) > 1e-12 {
			t.Errorf("training %d: %v, want %v", i, training[i], want)
		}
	}
	for i, want := range []float64{(score(2) + score(3)) / 2, score(1), score(5)} {
		if math.Abs(held[i]-want) > 1e-12 {
			t.Errorf("held %d: %v, want %v", i, held[i], want)
		}
	}
	if held[3] == held[3] {
		t.Errorf("a missing value became %v", held[3])
	}
}

func TestPenaltyGrid(t *testing.T) {
	grid := penalties(config.Penalties{Low: 0.01, High: 1e6, Count: 25})
	if len(grid) != 25 || grid[0] != 0.01 || grid[24] != 1e6 {
		t.Fatalf("grid %v", grid)
	}
	for i := 1; i < len(grid); i++ {
		if ratio := math.Log10(grid[i] / grid[i-1]); math.Abs(ratio-1.0/3) > 1e-9 {
			t.Errorf("step %d is 10^%v, want 10^(1/3)", i, ratio)
		}
	}
}
