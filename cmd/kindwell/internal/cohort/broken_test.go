package cohort

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var brokenInputs = []study{
	// The file as a whole.
	{name: "no such file", raw: map[string]string{"poeple.csv": pair},
		want: "people.csv: there is no such file; the nearest name in its folder is \"poeple.csv\""},
	{name: "no such file and nothing like it", raw: map[string]string{"measures.csv": pair},
		want: "people.csv: there is no such file"},
	{name: "no such folder", people: pair, in: peopleFile("tables/people.csv"),
		want: "tables/people.csv: there is no such file, nor its folder"},
	{name: "a folder", people: pair, in: func(in *Inputs) {
		in.People.File = "dir.csv"
		if err := os.Mkdir(filepath.Join(in.Folder, "dir.csv"), 0o700); err != nil {
			panic(err)
		}
	},
		want: "dir.csv: is a folder, not a table"},
	{name: "another extension", raw: map[string]string{"people.txt": pair}, in: peopleFile("people.txt"),
		want: "people.txt: a table is named .csv (commas) or .tsv (tabs), or one of these with .gz; rename the file after what it holds"},
	{name: "a workbook", raw: map[string]string{"people.xlsx": "PK\x03\x04"}, in: peopleFile("people.xlsx"),
		want: "people.xlsx: a table is named .csv (commas) or .tsv (tabs), or one of these with .gz; rename the file after what it holds"},
	{name: "a workbook named csv", people: "PK\x03\x04\x14\x00",
		want: "people.csv: is a spreadsheet or a zip archive; export the sheet as CSV in UTF-8"},
	{name: "gzip named csv", people: packedPair,
		want: "people.csv: is packed with gzip; add .gz to the name"},
	{name: "csv named gz", raw: map[string]string{"people.csv.gz": pair}, in: peopleFile("people.csv.gz"),
		want: "people.csv.gz: is not packed with gzip, whatever its name says; drop .gz from the name"},
	{name: "empty file named gz", raw: map[string]string{"people.csv.gz": ""}, in: peopleFile("people.csv.gz"),
		want: "people.csv.gz: the file is empty"},
	{name: "gzip cut short", raw: map[string]string{"people.csv.gz": packedPair[:len(packedPair)-9]}, in: peopleFile("people.csv.gz"),
		want: "people.csv.gz: the packed file ends too early; copy it anew"},
	{name: "gzip damaged", raw: map[string]string{"people.csv.gz": packedPair[:len(packedPair)-6] + "\x00" + packedPair[len(packedPair)-5:]}, in: peopleFile("people.csv.gz"),
		want: "people.csv.gz: the packed file is damaged; copy it anew"},
	{name: "empty file", people: " \n",
		want: "people.csv: the file is empty"},
	{name: "byte-order mark alone", people: "\ufeff\n",
		want: "people.csv: the file is empty"},
	{name: "header only", people: "person,family\n\n",
		want: "people.csv: has a header and no rows"},
	{name: "UTF-16 with mark", people: utf16Text(pair, true),
		want: "people.csv: is UTF-16 text; save it as UTF-8"},
	{name: "UTF-16 without mark", people: utf16Text(pair, false),
		want: "people.csv: is UTF-16 text; save it as UTF-8"},
	{name: "Latin-1", people: "person,family\nA,M\xfcller\n",
		want: "people.csv:2: byte 0xFC is not UTF-8 (an accented letter in an older encoding?); save the file as UTF-8"},
	{name: "NUL byte", people: "person,family\nA,F1\nB,F\x001\nC,F2\nD,F3\nE,F4\nF,F5\n",
		want: "people.csv:3: holds a NUL byte, so this is no text; export the table anew"},
	{name: "old Mac line ends", people: "person,family\rA,F1\rB,F1\r",
		want: "people.csv: its lines end in carriage returns alone; save it with line feeds (Unix or Windows line ends)"},

	// Rows and quotes.
	{name: "semicolons", people: "person;family;age\nA;F1;30,5\n",
		want: "people.csv:1: the columns seem to be separated by semicolons; save the table with commas (and decimal points)"},
	{name: "tabs in a csv", people: "person\tfamily\nA\tF1\n",
		want: "people.csv:1: the columns seem to be separated by tabs; name the file .tsv"},
	{name: "commas in a tsv", raw: map[string]string{"people.tsv": pair}, in: peopleFile("people.tsv"),
		want: "people.tsv:1: the columns seem to be separated by commas; name the file .csv"},
	{name: "semicolons in a tsv", raw: map[string]string{"people.tsv": "person;family\nA;F1\n"}, in: peopleFile("people.tsv"),
		want: "people.tsv:1: the columns seem to be separated by semicolons; save the table with tabs (and decimal points)"},
	{name: "sep line", people: "sep=,\nperson,family\nA,F1\n",
		want: "people.csv:1: is a spreadsheet's sep= line; delete it, so that the header comes first"},
	{name: "header with an open quote", people: "person,\"family\nA,F1\n",
		want: "people.csv:1: a quoted cell of this row is not closed, or text follows its closing quote; write quotes inside a cell twice"},
	{name: "too many columns", people: "person" + strings.Repeat(",x", 100_000) + "\n",
		want: "people.csv:1: has 100001 columns; at most 100000 can be read"},
	{name: "comment line", people: "# made in May\nperson,family\nA,F1\n",
		want: "people.csv:1: starts with a comment; the first line has to be the header, so delete what comes before it"},
	{name: "short row", people: "person,family,age\nA,F1,30\nB,F1\n",
		want: "people.csv:3: 2 cells where the header has 3 names; fill the row up with empty cells"},
	{name: "long row", people: "person,family,age\nA,F1,30\nSmith, B,F1,31\n",
		want: "people.csv:3: 4 cells where the header has 3 names; put a cell that holds a comma in quotes"},
	{name: "long row in a tsv", raw: map[string]string{"people.tsv": "person\tfamily\nA\tF1\tx\n"}, in: peopleFile("people.tsv"),
		want: "people.tsv:2: 3 cells where the header has 2 names; put a cell that holds a tab in quotes"},
	{name: "quote inside a cell", people: "person,family\nA,F\"1\"\n",
		want: "people.csv:2: a quote in the middle of a cell; put the whole cell in quotes and write the inner quote twice"},
	{name: "quote never closed", people: "person,family\nA,F1\nB,\"F1\nC,F2\nD,F2\n",
		want: "people.csv:3: a quoted cell of this row is not closed, or text follows its closing quote; write quotes inside a cell twice"},
	{name: "text after a quote", people: "person,family\n\"A\"x,F1\n",
		want: "people.csv:2: a quoted cell of this row is not closed, or text follows its closing quote; write quotes inside a cell twice"},
	{name: "a cell without end", people: "person,notes\nA,\"" + strings.Repeat("long ", 8000) + "\"\n",
		want: "people.csv:2: column \"notes\": a cell of more than 32,767 characters; is a quote opened here and closed much later?"},
	{name: "empty line in one column", people: "person\nA\n\nB\n",
		want: "people.csv:3: an empty line in a table of one column; write NA for a missing cell, or delete the line"},
	{name: "column without name", people: "person,,age\nA,F1,30\n",
		want: "people.csv:1: column 2 has no name; name it, or delete it"},
	{name: "delimiter at the end", people: "person,family,\nA,F1,\n",
		want: "people.csv:1: column 3 has no name; does the line end in a delimiter?"},
	{name: "name twice", people: "person,age,family,age \nA,30,F1,31\n",
		want: "people.csv:1: column \"age\": is the name of columns 2 and 4; rename one of them"},
	{name: "line numbers after a quoted line break", people: "person,notes,age\nA,\"one\ntwo\",30\nB,,old\n,,1\nC,,31\nD,,1\nE,,1\nF,,1\nG,,1\nH,,1\nI,,1\nJ,,1\n",
		want: "people.csv:4: column \"age\": \"old\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing; 10 of the 11 cells of this column are numbers (if they are codes of categories, begin each with a letter)"},
	{name: "cell address inside a row of two lines", people: "person,notes,age\nA,\"one\ntwo\",old\n" + rows("B,,3%d\n", 9),
		want: "people.csv:3: column \"age\": \"old\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing; 9 of the 10 cells of this column are numbers (if they are codes of categories, begin each with a letter)"},

	// Columns.
	{name: "no person column among many", people: "a,b,c,d,e,f,g,h,i,j\n1,1,1,1,1,1,1,1,1,1\n",
		want: `people.csv:1: there is no column "person"; its columns are "a", "b", "c", "d", "e", "f", "g", "h" and 2 more; name it, or map it (people: {columns: {person: NAME}})`},
	{name: "no person column", people: "participant_id,family\nA,F1\n",
		want: "people.csv:1: there is no column \"person\"; its columns are \"participant_id\", \"family\"; name it, or map it (people: {columns: {person: NAME}})"},
	{name: "person in capitals", people: "Person,family\nA,F1\n",
		want: "people.csv:1: there is no column \"person\"; the nearest name is \"Person\"; name it, or map it (people: {columns: {person: NAME}})"},
	{name: "mapped column missing", people: "person,fam\nA,F1\n", in: peopleColumns("family", "famly"),
		want: "people.csv:1: there is no column \"famly\"; its columns are \"person\", \"fam\"; the study names it under people.columns, family"},
	{name: "mapping of an unknown role", people: "person,fam\nA,F1\n", in: peopleColumns("familly", "fam"),
		want: "people.csv:1: people.columns names \"familly\", which is no column of ours; the nearest name is \"family\""},
	{name: "mapped column beside our name", people: "person,age,age_at_scan\nA,30,31\n", in: peopleColumns("age", "age_at_scan"),
		want: "people.csv:1: column \"age\": is in the table although people.columns takes age from \"age_at_scan\"; rename it, or drop the entry"},
	{name: "one column for two roles", people: "id,family\nA,F1\n", in: peopleColumns("person", "id", "mother", "id"),
		want: "people.csv:1: column \"id\": people.columns uses it for both person and mother"},
	{name: "session column missing", people: "person,visit\nA,1\n", in: sessions("vist", "", ""),
		want: "people.csv:1: there is no column \"vist\"; the nearest name is \"visit\"; the study names it under people.session"},
	{name: "session column is a role", people: "person,family\nA,1\n", in: sessions("family", "", ""),
		want: "people.csv:1: column \"family\": people.session names it, but it is the column of family"},

	// Ids.
	{name: "person twice", people: "person,family\nA,F1\nB,F1\nA,F1\n",
		want: "people.csv:4: column \"person\": \"A\": is already on row 2; delete one of the rows, or, if the table has a row a session, name that column (people: {session: NAME})"},
	{name: "person missing", people: "person,family\nA,F1\nNA,F1\n,F2\n",
		want: "people.csv:3: column \"person\": the id is missing (an id cannot be empty, NA, n/a, NaN or a missing code)\n" +
			"people.csv:4: column \"person\": the id is missing (an id cannot be empty, NA, n/a, NaN or a missing code)"},
	{name: "person is a missing code", people: "person,family\n-9,F1\nB,F1\n", in: func(in *Inputs) { in.MissingCodes = []string{"-9"} },
		want: "people.csv:2: column \"person\": the id is missing (an id cannot be empty, NA, n/a, NaN or a missing code)"},
	{name: "blank after an id", people: "person,mother\nA,M \nM,\n",
		want: "people.csv:2: column \"mother\": \"M \": an id with blanks or invisible characters at its ends; ids are matched to the letter, so take them off"},
	{name: "no-break space before an id", people: "person,mother\nA,M\n\u00a0M,\n",
		want: "people.csv:3: column \"person\": \"\\u00a0M\": an id with blanks or invisible characters at its ends; ids are matched to the letter, so take them off"},
	{name: "zero-width space after an id", people: "person,family\nA\u200b,F1\n",
		want: "people.csv:2: column \"person\": \"A\\u200b\": an id with blanks or invisible characters at its ends; ids are matched to the letter, so take them off"},

	// Numbers.
	{name: "decimal comma", people: "person,age\nA,\"30,5\"\n" + rows("B%d,31\n", 9),
		want: "people.csv:2: column \"age\": \"30,5\": is not a number: commas are not read; write a decimal point, and nothing between thousands; 9 of the 10 cells of this column are numbers (if they are codes of categories, begin each with a letter)"},
	{name: "digit groups", traits: "person,income\nA,1'000\nB,2000\n", people: pair, in: numeric("income"),
		want: "traits.csv:2: column \"income\": \"1'000\": is not a number: write it without marks between groups of digits"},
	{name: "percent", traits: "person,share\nA,12 %\nB,2\n", people: pair, in: numeric("share"),
		want: "traits.csv:2: column \"share\": \"12 %\": is not a number: take off the percent sign in the whole column"},
	{name: "typographic minus", traits: "person,score\nA,\u22121.5\nB,2\n", people: pair, in: numeric("score"),
		want: "traits.csv:2: column \"score\": \"−1.5\": is not a number: its minus sign is a typographic one; write a hyphen"},
	{name: "infinity", traits: "person,score\nA,-Inf\nB,2\n", people: pair, in: numeric("score"),
		want: "traits.csv:2: column \"score\": \"-Inf\": is not a finite number; leave the cell empty if it is missing"},
	{name: "hexadecimal", traits: "person,score\nA,0x1p-2\nB,2\n", people: pair, in: numeric("score"),
		want: "traits.csv:2: column \"score\": \"0x1p-2\": is not a decimal number; write it without 0x"},
	{name: "underscores", traits: "person,score\nA,1_000\nB,2\n", people: pair, in: numeric("score"),
		want: "traits.csv:2: column \"score\": \"1_000\": is not a number: write it without marks between groups of digits"},
	{name: "too large", traits: "person,score\nA,1e400\nB,2\n", people: pair, in: numeric("score"),
		want: "traits.csv:2: column \"score\": \"1e400\": is too large for a 64-bit number; choose another unit"},
	{name: "too small", traits: "person,score\nA,1e-400\nB,2\n", people: pair, in: numeric("score"),
		want: "traits.csv:2: column \"score\": \"1e-400\": is too small for a 64-bit number; choose another unit, or write 0"},
	{name: "top-coded trait", traits: "person,score\nA,89+\nB,2\n", people: pair, in: numeric("score"),
		want: "traits.csv:2: column \"score\": \"89+\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing"},
	{name: "two points", traits: "person,score\nA,1.2.3\nB,2\n", people: pair, in: numeric("score"),
		want: "traits.csv:2: column \"score\": \"1.2.3\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing"},
	{name: "text trait", traits: "person,mood\nA,good\nB,bad\n", people: pair, in: numeric("mood"),
		want: "traits.csv:2: column \"mood\": \"good\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing; so with 2 of the 2 cells of this column, which has to hold numbers"},
	{name: "sex as a trait", people: pair, in: numeric("sex"),
		want: "people.csv:1: column \"sex\": the study uses it as numbers, but a column of sex is read as words"},
	{name: "one bad age", people: "person,age\n" + rows("A%d,30\n", 9) + "B,thirty\n",
		want: "people.csv:11: column \"age\": \"thirty\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing; 9 of the 10 cells of this column are numbers (if they are codes of categories, begin each with a letter)"},
	{name: "text measure", people: pair, measures: "person,dwell,site\nA,1,north\nB,2,south\n", in: func(in *Inputs) { in.Measures.Use = []string{"*"} },
		want: "measures.csv:2: column \"site\": \"north\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing; so with 2 of the 2 cells of this column, which has to hold numbers (if it is no measure, narrow the patterns of measures.sets)"},
	{name: "bad measure", people: pair, measures: "person,dwell,rate\nA,1,.\nB,,2\n",
		want: "measures.csv:2: column \"rate\": \".\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing"},

	// Relations.
	{name: "own mother", people: "person,mother\nA,A\n",
		want: "people.csv:2: column \"mother\": \"A\": \"A\" is named as their own mother"},
	{name: "own ancestor", people: "person,mother\nA,B\nB,C\nC,A\n",
		want: "people.csv:2: column \"mother\": \"B\": \"A\" is their own ancestor; child to parent: \"A\", \"B\", \"C\", \"A\" (row 3)"},
	{name: "mother and father", people: "person,mother,father\nA,P,Q\nB,R,P\nP,,\n",
		want: "people.csv:3: column \"father\": \"P\": \"P\" is the father of \"B\" and the mother of \"A\"; nobody is both (row 2)"},
	{name: "twin set across mothers", people: "person,mother,twin_set,zygosity\nA,M,T,DZ\nB,N,T,DZ\n",
		want: "people.csv:3: column \"mother\": \"N\": \"B\" has the mother \"N\", the co-twin \"A\" has \"M\"; twins have one mother (row 2)"},
	{name: "identical twins of different sex", people: "person,twin_set,zygosity,sex\nA,T,MZ,m\nB,T,MZ,f\n",
		want: "people.csv:3: column \"sex\": \"f\": \"B\" is female, the identical twin \"A\" is male (row 2)"},
	{name: "zygosity without a twin set", people: "person,family,twin_set,zygosity\nA,F1,,MZ\nB,F1,,\n",
		want: "people.csv:2: column \"zygosity\": \"MZ\": \"A\" is MZ without a twin set"},
	{name: "zygosity in words", people: "person,twin_set,zygosity\nA,T,monozygotic\nB,T,fraternal\nC,U,1\nD,U,1\n",
		want: "people.csv:2: column \"zygosity\": \"monozygotic\": zygosity is MZ or DZ, or empty for people who are no twins and where it is not known; write MZ\n" +
			"people.csv:3: column \"zygosity\": \"fraternal\": zygosity is MZ or DZ, or empty for people who are no twins and where it is not known; write DZ\n" +
			"people.csv:4: column \"zygosity\": \"1\": zygosity is MZ or DZ, or empty for people who are no twins and where it is not known\n" +
			"people.csv:5: column \"zygosity\": \"1\": zygosity is MZ or DZ, or empty for people who are no twins and where it is not known"},
	{name: "zygosities of one set", people: "person,twin_set,zygosity\nA,T,MZ\nB,T,DZ\n",
		want: "people.csv:3: column \"zygosity\": \"DZ\": \"B\" is DZ, \"A\" of the same twin set is MZ (row 2)"},
	{name: "mapped column in the address", people: "id,mum,twins\nA,M,T\nB,N,T\n", in: peopleColumns("person", "id", "mother", "mum", "twin_set", "twins"),
		want: "people.csv:3: column \"mum\": \"N\": \"B\" has the mother \"N\", the co-twin \"A\" has \"M\"; twins have one mother (row 2)"},

	// Sessions.
	{name: "rows of a person with two mothers", people: "person,visit,mother\nA,1,M\nA,2,N\n", in: sessions("visit", "", ""),
		want: "people.csv:3: column \"mother\": \"N\": row 2 of the same person has \"M\"; make the rows of a person agree"},
	{name: "rows of a person with two sexes", people: "person,visit,sex\nA,1,female\nA,2,M\n", in: sessions("visit", "", ""),
		want: "people.csv:3: column \"sex\": \"M\": row 2 of the same person has \"female\"; make the rows of a person agree"},
	{name: "rows of a person with two zygosities", people: "person,visit,twin_set,zygosity\nA,1,T,MZ\nA,2,T,DZ\n", in: sessions("visit", "", ""),
		want: "people.csv:3: column \"zygosity\": \"DZ\": row 2 of the same person has \"MZ\"; make the rows of a person agree"},
	{name: "session twice", people: pair, measures: "person,session,dwell\nA,1,1\nA,2,2\nA,1,3\n", in: sessions("", "session", ""),
		want: "measures.csv:4: column \"session\": \"1\": the same person and session is already on row 2; delete one of the rows"},
	{name: "session missing", people: pair, measures: "person,session,dwell\nA,1,1\nA,,2\n", in: sessions("", "session", ""),
		want: "measures.csv:3: column \"session\": the session is missing; fill it in, or delete the row"},
	{name: "several rows without a session column", people: pair, measures: "person,session,dwell\nA,1,1\nA,2,2\n",
		want: "measures.csv:3: column \"person\": \"A\": is already on row 2; delete one of the rows, or, if the table has a row a session, name that column (measures: {session: NAME})"},
	{name: "trait table with several rows", people: pair, traits: "person,mood\nA,1\nA,2\n",
		want: "traits.csv:3: column \"person\": \"A\": is already on row 2; delete one of the rows, or, if the table has a row a session, name that column (traits: {session: NAME})"},

	// Tables against each other.
	{name: "nobody known", people: pair, measures: "person,dwell\nsub-A,1\nsub-B,2\n",
		want: "measures.csv:2: column \"person\": \"sub-A\": not one of the 2 people of this table is in people.csv, whose first person is \"A\"; ids are matched to the letter"},
	{name: "measures without ids", people: pair, measures: "subject,dwell\nA,1\n",
		want: "measures.csv:1: there is no column \"person\"; its columns are \"subject\", \"dwell\"; name it, or map it (measures: {columns: {person: NAME}})"},
	{name: "measures under another column of ids", people: pair, measures: "person,dwell\nA,x\n", in: func(in *Inputs) { in.Measures.Person = "participant" },
		want: `measures.csv:1: there is no column "participant"; its columns are "person", "dwell"; the study names it under measures.columns`},
	{name: "measures of nothing but ids", people: pair, measures: "person,family\nA,F1\n",
		want: `measures.csv:1: has no column that is a measure (any but that of ids); its columns are "person", "family"`},
	{name: "measures without measures", people: pair, measures: "person,dwell\nA,1\n", in: func(in *Inputs) { in.Measures.Use = []string{"occupancy_*"} },
		want: "measures.csv:1: has no column that is a measure (patterns: \"occupancy_*\"); its columns are \"person\", \"dwell\""},
	{name: "trait named like a column of people", people: pair, traits: "person,age\nA,31\n",
		want: "traits.csv:1: column \"age\": is a column of people.csv too; rename one of them, so that the name means one thing in the results"},
	{name: "trait named like a measure", people: pair, measures: "person,dwell\nA,1\n", traits: "person,dwell\nA,1\n",
		want: "traits.csv:1: column \"dwell\": is a column of measures.csv too; rename one of them, so that the name means one thing in the results"},
	{name: "unknown parents coded 0", people: "person,family,mother,father\nA,1,0,0\nB,2,0,0\nC,3,0,0\n",
		want: "people.csv:1: column \"mother\": \"0\": is the mother of 3 people under 3 family labels, which makes them one family; if it means unknown, leave these cells empty (or name it under missing_codes, if it is a value in no other column)\n" +
			"people.csv:1: column \"father\": \"0\": is the father of 3 people under 3 family labels, which makes them one family; if it means unknown, leave these cells empty (or name it under missing_codes, if it is a value in no other column)\n" +
			"people.csv:2: column \"father\": \"0\": \"0\" is the father of \"A\" and the mother of \"A\"; nobody is both"},
	{name: "one table for measures and traits", people: pair, measures: "person,dwell\nA,1\n", in: func(in *Inputs) { in.Traits = []TableInput{{File: "measures.csv"}} },
		want: "measures.csv:1: column \"dwell\": is a measure and a trait of the same table; write patterns of measures that leave the traits out"},
	{name: "people as traits again", people: "person,age\nA,30\n", in: func(in *Inputs) { in.Traits = []TableInput{{File: "people.csv"}} },
		want: "people.csv:1: column \"age\": is a column of people already; the people table need not be named as a table of measures or traits again"},
	{name: "faults of three tables", people: "person,age\nA,30\nA,31\n", measures: "person,dwell\nA,x\n", traits: "person,mood,mood\nA,1,2\n",
		want: "people.csv:3: column \"person\": \"A\": is already on row 2; delete one of the rows, or, if the table has a row a session, name that column (people: {session: NAME})\n" +
			"measures.csv:2: column \"dwell\": \"x\": is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing\n" +
			"traits.csv:1: column \"mood\": is the name of columns 2 and 3; rename one of them"},
}

func TestBrokenInputs(t *testing.T) {
	for _, b := range brokenInputs {
		t.Run(b.name, func(t *testing.T) {
			_, err := b.load(t)
			if err == nil {
				t.Fatal("was taken")
			}
			if got := err.Error(); got != b.want {
				t.Errorf("got\n%s\nwant\n%s", got, b.want)
			}
			var fault *Fault
			if !errors.As(err, &fault) {
				t.Fatal("no Fault inside")
			}
			if fault.File == "" || fault.Message == "" {
				t.Errorf("incomplete fault %+v", fault)
			}
		})
	}
}
