package tidy

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"reflect"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestExactBytes(t *testing.T) {
	rows := []TwinCorrelation{
		{Variable: "occupancy_3", Role: "measure", Relation: "mz", Pairs: 84, Families: 84, Correlation: 0.5,
			Interval: Interval{Low: 0.05, High: 1.0 / 3, IntervalKind: "profile", Confidence: 0.95}},
		{Variable: `quote " and, comma`, Role: "trait", Relation: "spouse", Correlation: -1e-7,
			Interval: Interval{Low: math.NaN(), High: math.Copysign(0, -1), Confidence: 1e6}},
		{Variable: " two\nlines", Role: "trait", Relation: "other_kin", Pairs: -3, Correlation: 1e-6,
			Interval: Interval{Low: math.Inf(-1), High: 1e21, Confidence: 20260112}},
	}
	want := "variable,role,relation,pairs,families,correlation,low,high,interval_kind,confidence\n" +
		"occupancy_3,measure,mz,84,84,0.5,0.05,0.3333333333333333,profile,0.95\n" +
		"\"quote \"\" and, comma\",trait,spouse,0,0,-1e-07,,0,,1000000\n" +
		"\" two\nlines\",trait,other_kin,-3,0,0.000001,-INF,1e+21,,20260112\n"
	var got bytes.Buffer
	if err := Write(&got, rows); err != nil {
		t.Fatal(err)
	}
	if got.String() != want {
		t.Errorf("got\n%s\nwant\n%s", got.String(), want)
	}
}

func TestMissingAndTruth(t *testing.T) {
	rows := []VarianceModel{{Variable: "x", Role: "trait", Model: "E", LogLikelihood: math.NaN(), AIC: 2, BIC: 3, Converged: true}}
	var got bytes.Buffer
	if err := Write(&got, rows); err != nil {
		t.Fatal(err)
	}
	if want := "x,trait,E,,0,2,3,true,0,false\n"; !strings.HasSuffix(got.String(), "\n"+want) {
		t.Errorf("got %q, want it to end in %q", got.String(), want)
	}
	got.Reset()
	test := Blank[PredictionScore]()
	test.Permutations = Int(0)
	if err := Write(&got, []PredictionScore{test}); err != nil {
		t.Fatal(err)
	}
	if want := ",,,,,,,false,0,0,,,,,,,,,,,,,0,,,,,\n"; !strings.HasSuffix(got.String(), "\n"+want) {
		t.Errorf("got %q, want it to end in %q", got.String(), want)
	}
}

func TestNoRowsIsAHeader(t *testing.T) {
	var got bytes.Buffer
	if err := Write[Exclusion](&got, nil); err != nil {
		t.Fatal(err)
	}
	if want := "analysis,variable,person,reason\n"; got.String() != want {
		t.Errorf("got %q, want %q", got.String(), want)
	}
}

// Any rows come back as they were, and encoding/csv, given the same cells,
// writes the same bytes.
func TestRoundTrip(t *testing.T) {
	t.Run("relations", roundTrip[Relation])
	t.Run("prediction_scores", roundTrip[PredictionScore])
	t.Run("predictions", roundTrip[Prediction])
	t.Run("heritability", roundTrip[Heritability])
	t.Run("variance_components", roundTrip[VarianceComponent])
	t.Run("variance_tests", roundTrip[VarianceTest])
	t.Run("warnings", roundTrip[Warning])
}

func roundTrip[T any](t *testing.T) {
	table := TableOf[T]()
	rapid.Check(t, func(t *rapid.T) {
		rows := make([]T, rapid.IntRange(0, 6).Draw(t, "rows"))
		for i := range rows {
			v := rowValue(rows, i)
			for _, c := range table.Columns {
				drawField(t, v.FieldByIndex(c.index), c)
			}
		}
		var file bytes.Buffer
		if err := Write(&file, rows); err != nil {
			t.Fatal(err)
		}
		checkAgainstCSV(t, file.Bytes())
		back, err := Read[T](bytes.NewReader(file.Bytes()))
		if err != nil {
			t.Fatal(err)
		}
		if len(back) != len(rows) {
			t.Fatalf("%d rows came back, want %d", len(back), len(rows))
		}
		for i := range rows {
			for _, c := range table.Columns {
				was, is := rowValue(rows, i).FieldByIndex(c.index), rowValue(back, i).FieldByIndex(c.index)
				if !sameField(was, is) {
					t.Fatalf("row %d, column %s: %v came back as %v", i, c.Name, was, is)
				}
			}
		}
	})
}

func checkAgainstCSV(t *rapid.T, file []byte) {
	records, err := csv.NewReader(bytes.NewReader(file)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var again bytes.Buffer
	w := csv.NewWriter(&again)
	if err := w.WriteAll(records); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(again.Bytes(), file) {
		t.Fatalf("encoding/csv writes\n%q, not\n%q", again.Bytes(), file)
	}
}

func sameField(a, b reflect.Value) bool {
	if a.Kind() != reflect.Float64 {
		return a.Interface() == b.Interface()
	}
	x, y := a.Float(), b.Float()
	return x == y || math.IsNaN(x) && math.IsNaN(y)
}

// Texts with everything that makes quoting hard. A carriage return before a
// line feed is left out: encoding/csv reads the two as one.
var text = rapid.OneOf(
	rapid.StringMatching(`[a-z_0-9]{0,9}`),
	rapid.StringMatching(`( |\t|"|,|;|\n|\\|\.|é|京|a| |=){1,8}`),
	rapid.Just(`\.`), rapid.Just("a\rb"),
)

func drawField(t *rapid.T, field reflect.Value, c Column) {
	switch {
	case c.Unfilled:
		if c.Kind == Number {
			field.SetFloat(math.NaN())
		}
	case c.Enum != nil:
		value := rapid.SampledFrom(c.Enum).Draw(t, c.Name)
		if c.Key || rapid.Bool().Draw(t, "present") {
			field.SetString(value)
		}
	case c.Kind == Text:
		s := text.Draw(t, c.Name)
		if s == "" && c.Key {
			s = "key"
		}
		field.SetString(s)
	case c.Kind == Integer:
		field.SetInt(rapid.Int64().Draw(t, c.Name))
	case c.Kind == MaybeInteger:
		if rapid.Bool().Draw(t, "known") {
			field.Set(reflect.ValueOf(Int(rapid.Int().Draw(t, c.Name))))
		}
	case c.Kind == Number:
		field.SetFloat(rapid.OneOf(rapid.Float64(), rapid.Float64Range(-1, 1),
			rapid.Map(rapid.Uint64(), math.Float64frombits), rapid.Just(math.NaN()), rapid.Just(math.Inf(-1))).Draw(t, c.Name))
	case c.Kind == Boolean:
		field.SetBool(rapid.Bool().Draw(t, c.Name))
	}
}

// Numbers are plain where people expect it and have an exponent elsewhere, in
// the fewest digits that read back.
func TestNumbers(t *testing.T) {
	for x, want := range map[float64]string{
		0.05: "0.05", 0.001: "0.001", 1.5e-6: "0.0000015", 9.99e-7: "9.99e-07", 1e6: "1000000", 123456789: "123456789",
		1e20: "100000000000000000000", 1e21: "1e+21", -2.5: "-2.5", math.MaxFloat64: "1.7976931348623157e+308",
		math.SmallestNonzeroFloat64: "5e-324", 0.30000000000000004: "0.30000000000000004",
	} {
		if got := string(appendNumber(nil, x)); got != want {
			t.Errorf("%v is written %s, want %s", x, got, want)
		}
	}
}

func TestCellsThatAreRefused(t *testing.T) {
	good := Blank[Heritability]()
	good.Variable, good.Role, good.Model = "x", "trait", "ACE"
	for _, c := range []struct {
		name   string
		break_ func(*Heritability)
		want   string
	}{
		{"category", func(r *Heritability) { r.Model = "ACDE" }, `table heritability, row 3, column "model": "ACDE" is none of ACE, ADE, AE, CE, E`},
		{"key", func(r *Heritability) { r.Variable = "" }, `table heritability, row 3, column "variable": part of the key is missing`},
		{"unfilled number", func(r *Heritability) { r.DetectableC2 = 0 }, `table heritability, row 3, column "detectable_c2": the column is declared as not computed in this version, but holds 0`},
		{"unfilled in a shared ending", func(r *Heritability) { r.Permutations = Int(99) }, `table heritability, row 3, column "permutations": the column is declared as not computed in this version, but holds 99`},
		{"UTF-8", func(r *Heritability) { r.Flags = "\xff" }, `table heritability, row 3, column "flags": "\xff" is not UTF-8`},
	} {
		t.Run(c.name, func(t *testing.T) {
			rows := []Heritability{good, good}
			c.break_(&rows[1])
			err := Write(io.Discard, rows)
			var cell *CellError
			if !errors.As(err, &cell) || err.Error() != c.want {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
}

func TestFilesThatAreRefused(t *testing.T) {
	header := "people_group,repeat,fold,person,family\n"
	for _, c := range []struct{ name, file, want string }{
		{"empty", "", "table folds: the file is empty"},
		{"other column", "people_group,repeat,fold,who,family\n", `table folds: column 4 is "who", want "person"`},
		{"short header", "people_group,repeat\n", `table folds: column "fold" is missing`},
		{"long header", "people_group,repeat,fold,person,family,more\n", `table folds: column "more" is not part of the table`},
		{"short row", header + "1,1,1,a\n", "table folds: record on line 2: wrong number of fields"},
		{"bare quote", header + "1,1,1,a\"b,f\n", `table folds: parse error on line 2, column 8: bare " in non-quoted-field`},
		{"fraction", header + "1,1,1,a,f\n1,1.5,1,a,f\n", `table folds, row 3, column "repeat": "1.5" is not a whole number`},
		{"missing int", header + ",1,1,a,f\n", `table folds, row 2, column "people_group": "" is not a whole number`},
		{"missing key", header + "1,1,1,,f\n", `table folds, row 2, column "person": part of the key is missing`},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Read[Fold](strings.NewReader(c.file))
			if err == nil || err.Error() != c.want {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
	cells := "trait,set,repeat,fold,penalty,inner_mse,at_end\n"
	for _, number := range []string{"NaN", "inf", "0x10", "1_000", "1,5", "1e", ".", "- 1"} {
		if _, err := Read[Penalty](strings.NewReader(cells + "t,s,1,1," + strconv.Quote(number) + ",1,\n")); err == nil {
			t.Errorf("%q was read as a number", number)
		}
	}
	truth := "variable,role,model,log_likelihood,parameters,aic,bic,converged,evaluations,lowest_aic\nx,trait,E,1,1,1,1,TRUE,1,false\n"
	if _, err := Read[VarianceModel](strings.NewReader(truth)); err == nil || !strings.Contains(err.Error(), `"TRUE" is neither true nor false`) {
		t.Errorf("TRUE: %v", err)
	}
}

// failAfter takes so many bytes and then fails as a full disk does.
type failAfter struct{ left int }

var errFull = errors.New("no space left")

func (w *failAfter) Write(p []byte) (int, error) {
	if len(p) > w.left {
		return w.left, errFull
	}
	w.left -= len(p)
	return len(p), nil
}

func TestWriterThatFails(t *testing.T) {
	rows := make([]Exclusion, 5000)
	for i := range rows {
		rows[i] = Exclusion{Analysis: "predict", Person: fmt.Sprint(i), Reason: "age is missing"}
	}
	var whole bytes.Buffer
	if err := Write(&whole, rows); err != nil {
		t.Fatal(err)
	}
	for _, room := range []int{0, chunk + 10, whole.Len() - 1} {
		if err := Write(&failAfter{left: room}, rows); !errors.Is(err, errFull) {
			t.Errorf("room for %d of %d bytes: %v", room, whole.Len(), err)
		}
	}
	if err := Write(&failAfter{left: whole.Len()}, rows); err != nil {
		t.Error(err)
	}
}

func TestFormulaCells(t *testing.T) {
	rows := []Warning{
		{Analysis: "people", About: "=cmd()", Message: "-5"},
		{Analysis: "-1.5e-3", About: "+2.", Message: "a=b"},
		{Analysis: "@sum", About: "\tx", Message: "\rx"},
		{Analysis: "-inf", About: "--5", Message: "+1+1"},
		{Analysis: "", About: "-", Message: "-0x1p-2"},
	}
	want := []FormulaCell{
		{"warnings", "about", 2},
		{"warnings", "analysis", 4}, {"warnings", "about", 4}, {"warnings", "message", 4},
		{"warnings", "analysis", 5}, {"warnings", "about", 5}, {"warnings", "message", 5},
		{"warnings", "about", 6}, {"warnings", "message", 6},
	}
	if got := FormulaCells(rows); !reflect.DeepEqual(got, want) {
		t.Errorf("got %v\nwant %v", got, want)
	}
	if got := FormulaCells([]Penalty{{Trait: "t", Penalty: -1, InnerMSE: -2}}); got != nil {
		t.Errorf("negative numbers were taken for formulas: %v", got)
	}
}

func BenchmarkWrite(b *testing.B) {
	rows := make([]Prediction, 50000)
	for i := range rows {
		x := float64(i) / 3
		rows[i] = Prediction{Trait: "wellbeing", Set: "occupancy", Repeat: 1, Fold: 1 + i%10, Person: fmt.Sprint("P", i), Family: "F1",
			Observed: x, Baseline: x / 7, Target: x / 11, Predicted: x / 13}
	}
	for b.Loop() {
		if err := Write(io.Discard, rows); err != nil {
			b.Fatal(err)
		}
	}
}

// Whatever the file holds, reading gives rows that survive another writing,
// or an error.
func FuzzRead(f *testing.F) {
	header := "variable,role,relation,pairs,families,correlation,low,high,interval_kind,confidence\n"
	f.Add(header + "x,trait,mz,1,1,0.5,-INF,,profile,.95e0\n")
	f.Add(header + "\"a\n,\"\"b\",trait,spouse,-1,0,INF,,,,\n")
	f.Add("variable\n")
	f.Fuzz(func(t *testing.T, file string) {
		rows, err := Read[TwinCorrelation](strings.NewReader(file))
		if err != nil {
			return
		}
		var once, twice bytes.Buffer
		if err := Write(&once, rows); err != nil {
			t.Fatal(err)
		}
		again, err := Read[TwinCorrelation](bytes.NewReader(once.Bytes()))
		if err != nil {
			t.Fatal(err)
		}
		if err := Write(&twice, again); err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(once.Bytes(), twice.Bytes()) {
			t.Errorf("%q became %q", once.Bytes(), twice.Bytes())
		}
	})
}
