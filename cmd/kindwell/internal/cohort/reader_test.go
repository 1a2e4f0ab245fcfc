package cohort

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// tableOf types a text as Load would, but for the file it comes from.
func tableOf(text []byte, comma rune, typing typing) (*Table, *collector) {
	var faults collector
	text, fault := checkText("t.csv", text)
	if fault != nil {
		faults.add(fault)
		return nil, &faults
	}
	g := readGrid(&source{file: "t.csv", comma: comma, text: text}, typing, &faults)
	if g == nil {
		return nil, &faults
	}
	return g.table(typing, &faults), &faults
}

// lineBreaksBefore counts as an editor does.
func lineBreaksBefore(text []byte, at int) int { return bytes.Count(text[:at], []byte("\n")) }

// What was written by another writer is read back to the letter, each row with
// the line on which it starts.
func TestTablesAreReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		width := rapid.IntRange(2, 5).Draw(t, "columns")
		cell := rapid.OneOf(rapid.StringMatching(`[a-z0-9,;"\n ü王]{0,6}`), rapid.SampledFrom([]string{"007", "1e5", "x\ny", `"`, "a,b"}))
		var b bytes.Buffer
		w := csv.NewWriter(&b)
		w.UseCRLF = rapid.Bool().Draw(t, "crlf")
		header := make([]string, width)
		for j := range header {
			header[j] = fmt.Sprintf("c%d", j)
		}
		if err := w.Write(header); err != nil {
			t.Fatal(err)
		}
		var records [][]string
		var lines []int
		for range rapid.IntRange(1, 8).Draw(t, "rows") {
			record := []string{"x"} // no row is empty
			for range width - 1 {
				record = append(record, cell.Draw(t, "cell"))
			}
			w.Flush()
			lines = append(lines, 1+lineBreaksBefore(b.Bytes(), b.Len()))
			if err := w.Write(record); err != nil {
				t.Fatal(err)
			}
			records = append(records, record)
		}
		w.Flush()
		table, faults := tableOf(b.Bytes(), ',', typing{role: func(string) Role { return Category }})
		if !faults.empty() {
			t.Fatal(faults.err())
		}
		if table.Len() != len(records) {
			t.Fatalf("%d rows of %d", table.Len(), len(records))
		}
		for i, record := range records {
			if table.Line(i) != lines[i] {
				t.Fatalf("row %d is on line %d, not %d", i, lines[i], table.Line(i))
			}
			for j, cell := range record {
				if got := table.Text(header[j])[i]; got != strings.TrimSpace(cell) {
					t.Fatalf("cell %d, %d: %q, not %q", i, j, got, cell)
				}
			}
		}
	})
}

// The short way and the long way to a number agree to the last bit.
func TestNumbersAreNearest(t *testing.T) {
	check := func(t interface{ Fatalf(string, ...any) }, cell string) {
		want, err := strconv.ParseFloat(cell, 64)
		if err != nil {
			return
		}
		got, why := parseNumber(cell)
		if why != "" {
			t.Fatalf("%q: %s", cell, why)
		}
		if math.Float64bits(got) != math.Float64bits(want) {
			t.Fatalf("%q: %v, want %v", cell, got, want)
		}
	}
	for _, cell := range []string{
		"0", "-0", "+0.0", ".1", "1.", "9007199254740991", "9007199254740992", "9007199254740993", "0.0000000000000000001",
		"123456789012345678901234567890", "0.3", "2.2250738585072014e-308", "5e-324", "1.7976931348623157e308", "8.41", "72057594037927945",
	} {
		check(t, cell)
	}
	rapid.Check(t, func(t *rapid.T) {
		check(t, rapid.StringMatching(`[-+]?[0-9]{1,20}(\.[0-9]{0,20})?`).Draw(t, "decimal"))
		check(t, rapid.StringMatching(`-?[0-9]\.[0-9]{0,17}e-?[0-9]{1,2}`).Draw(t, "with exponent"))
		check(t, strconv.FormatFloat(rapid.Float64().Draw(t, "float"), 'g', -1, 64))
	})
}

func TestWhatIsNoNumber(t *testing.T) {
	for _, cell := range []string{
		"", "-", "+", ".", "e5", "1e", "1e+", "--1", "+-1", "1-", "1.2.3", "1e5.0", "Inf", "+inf", "infinity", "nan", "0x10", "1_0",
		"1e400", "-1e400", "1e-400", "1,5", "1 000", "12%", "one", "１", "1\x00",
	} {
		if v, why := parseNumber(cell); why == "" {
			t.Errorf("%q was read as %v", cell, v)
		}
	}
}

// Whatever the bytes: no panic, and every fault is one line that points into the
// file.
func FuzzReadTable(f *testing.F) {
	for _, b := range brokenInputs {
		f.Add([]byte(b.people), true)
		f.Add([]byte(b.measures), false)
	}
	f.Add([]byte("\ufeffperson,age\r\n\"a\r\nb\",1\r\n"), true)
	f.Add([]byte("person\n\"\"\n\n x\n"), true)
	f.Fuzz(func(t *testing.T, text []byte, comma bool) {
		delimiter := '\t'
		if comma {
			delimiter = ','
		}
		roles := []Role{ID, Auto, Number, Category}
		number := 0
		before := bytes.Clone(text)
		table, faults := tableOf(text, delimiter, typing{
			missing: newMissingCells([]string{"-9"}),
			role:    func(name string) Role { number++; return roles[(number-1)%len(roles)] },
			warn:    func(about, message string) {},
		})
		if !bytes.Equal(text, before) {
			t.Fatal("the text changed")
		}
		last := 1 + bytes.Count(text, []byte("\n"))
		for _, fault := range faults.list {
			if fault.Message == "" || fault.Row < 0 || fault.Row > last {
				t.Fatalf("%+v in a file of %d lines", fault, last)
			}
			if strings.ContainsAny(fault.Error(), "\n\x00") {
				t.Fatalf("the message is no single line: %q", fault.Error())
			}
		}
		if table == nil {
			if faults.empty() {
				t.Fatal("neither a table nor a fault")
			}
			return
		}
		if faults.empty() && table.Len() == 0 {
			t.Fatal("a table without rows")
		}
		for i := range table.Len() {
			if table.Line(i) > last || i > 0 && table.Line(i) <= table.Line(i-1) {
				t.Fatalf("row %d is on line %d", i, table.Line(i))
			}
		}
		for _, name := range table.Names() {
			if table.Numeric(name) {
				for _, v := range table.Numbers(name) {
					if math.IsInf(v, 0) {
						t.Fatal("infinite")
					}
				}
				continue
			}
			for _, cell := range table.Text(name) {
				if faults.empty() && cell != trimmed(cell) {
					t.Fatalf("blanks around %q", cell)
				}
			}
		}
	})
}

func TestReadTable(t *testing.T) {
	folder := folderWith(t, map[string]string{"index.csv": "person,session,file,rate_hz,notes\nA,1,a.npy,250,x\nB,,b.npy,-1,y\n"})
	table, input, err := ReadTable(folder, "index.csv", TableOptions{
		Roles: map[string]Role{"person": ID, "session": ID, "file": ID, "rate_hz": Number, "none": ID}, Other: Skip, MissingCodes: []string{"-1"},
	})
	if err != nil {
		t.Fatal(err)
	}
	want(t, "names", table.Names(), []string{"person", "session", "file", "rate_hz", "notes"})
	want(t, "session", table.Text("session"), []string{"1", ""})
	want(t, "file", table.Text("file"), []string{"a.npy", "b.npy"})
	if rate := table.Numbers("rate_hz"); rate[0] != 250 || !math.IsNaN(rate[1]) {
		t.Error(rate)
	}
	if table.Has("notes") || table.Has("none") || !table.Has("file") || table.Numeric("file") || table.File() != "index.csv" || input.Bytes == 0 {
		t.Error("wrong about its columns")
	}
	if rows, columns := table.Frame().Dims(); rows != 2 || columns != 4 {
		t.Error(table.Frame())
	}
	if got := table.Fault(1, "file", "b.npy", "is not there").Error(); got != `index.csv:3: column "file": "b.npy": is not there` {
		t.Error(got)
	}
	for name, ask := range map[string]func(){
		"cohort: \"file\" is no column of numbers": func() { table.Numbers("file") },
		"cohort: \"rate_hz\" is no column of text": func() { table.Text("rate_hz") },
		"cohort: \"notes\" is no column of text":   func() { table.Text("notes") },
	} {
		func() {
			defer func() {
				if got := recover(); got != name {
					t.Errorf("panic %v, want %s", got, name)
				}
			}()
			ask()
		}()
	}
	_, _, err = ReadTable(folder, "indx.csv", TableOptions{})
	if err == nil || err.Error() != `indx.csv: there is no such file; the nearest name in its folder is "index.csv"` {
		t.Error(err)
	}
}

// A cell after a line break inside its row is further down than the row.
func TestFaultInsideARowOfSeveralLines(t *testing.T) {
	table, faults := tableOf([]byte("person,notes,age\nA,\"one\ntwo\",3\nB,x,4\n"), ',', typing{role: func(string) Role { return Auto }})
	if !faults.empty() {
		t.Fatal(faults.err())
	}
	for _, c := range []struct {
		row    int
		column string
		want   int
	}{{0, "person", 2}, {0, "notes", 2}, {0, "age", 3}, {0, "", 2}, {1, "age", 4}} {
		if got := table.Fault(c.row, c.column, "", "is odd").Row; got != c.want {
			t.Errorf("row %d, column %q is on line %d, want %d", c.row, c.column, got, c.want)
		}
	}
}

func TestReadNames(t *testing.T) {
	folder := folderWith(t, map[string]string{"a.csv": "\ufeffperson, age\nA,x,too long\n", "b.csv": "a,a\n", "c.csv": "\n"})
	names, err := ReadNames(folder, "a.csv")
	if err != nil {
		t.Fatal(err)
	}
	want(t, "names", names, []string{"person", "age"})
	for _, file := range []string{"b.csv", "c.csv", "d.csv"} {
		var fault *Fault
		if _, err := ReadNames(folder, file); !errors.As(err, &fault) || fault.File != file {
			t.Error(file, err)
		}
	}
}

// A data frame turns the text NaN into a missing cell and renames columns without
// a word; neither may happen here.
func TestTheFrameChangesNothing(t *testing.T) {
	table, faults := tableOf([]byte("X0,c,a_0,a\n1e-9,<nil>,0.1234567890123,true\n,-nan,2,false\n"), ',', typing{role: func(string) Role { return Auto }})
	if !faults.empty() {
		t.Fatal(faults.err())
	}
	want(t, "names", table.Frame().Names(), []string{"X0", "c", "a_0", "a"})
	want(t, "c", table.Text("c"), []string{"<nil>", "-nan"})
	want(t, "a", table.Text("a"), []string{"true", "false"})
	want(t, "a_0", table.Numbers("a_0"), []float64{0.1234567890123, 2})
	if got := table.Numbers("X0"); got[0] != 1e-9 || !math.IsNaN(got[1]) {
		t.Error(got)
	}
}
