package study

import (
	"errors"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

func ptr(x float64) *float64 { return &x }

// Each thing that can be wrong with a table has its own message, which says
// where it is, what was found, what was expected. "in" is read as the file
// calls.csv.
func TestProblems(t *testing.T) {
	const unknown = "accept or reject, or a usual word for one of them (pass, go, ok, 1; fail, nogo, nok, 0)"
	const settingsHint = "say what other words mean with --accept and --reject, or list kinds with --categories, grades with --order"
	for _, c := range []struct {
		name, in string
		settings Settings
		want     string
	}{
		{"unknown word", "part,appraiser,trial,call\n1,a,1,go\n2,a,1,og\n3,a,1,zzz\n4,a,1,ZZZ\n", Settings{},
			`calls.csv:3:4: found "og" in column 4 (call), expected ` + unknown + `; did you mean go? Else ` + settingsHint + `
calls.csv:4:4: found "ZZZ" (2 times) in column 4 (call), expected ` + unknown + `; ` + settingsHint},
		{"unknown word of the reference", "part,reference,a-1\n1,maybe,go\n", Settings{},
			`calls.csv:2:2: found "maybe" in column 2 (reference), expected ` + unknown + `; ` + settingsHint},
		{"unknown reference in each row of a part", "part,appraiser,trial,call,reference\n1,a,1,go,maybe\n2,a,1,go,go\n1,a,2,go,maybe\n1,b,1,go,maybe\n3,a,1,go,maybe\n1,b,2,go,maybe\n", Settings{},
			`calls.csv:2:5: found "maybe" (2 times) in column 5 (reference), expected ` + unknown + `; ` + settingsHint},
		{"word that categories do not list", "part,a-1\n1,maybe\n2,dent\n", Settings{Categories: []string{"dent", "ok"}},
			`calls.csv:2:2: found "maybe" in column 2 (a-1), expected dent or ok, as categories lists; add the word to categories if it is right`},
		{"word of neither accept nor reject", "part,a-1\n1,gone\n2,dent\n3,fine\n", Settings{Accept: []string{"fine"}, Reject: []string{"dent"}},
			`calls.csv:2:2: found "gone" in column 2 (a-1), expected accept (fine) or reject (dent), or a usual word for one of them (pass, go, ok, 1; fail, nogo, nok, 0); add the word to accept or to reject if it is right`},
		{"word beside reject alone", "part,a-1\n1,ok\n2,dent\n3,fine\n", Settings{Reject: []string{"dent"}},
			`calls.csv:4:2: found "fine" in column 2 (a-1), expected accept or reject (dent), or a usual word for one of them (pass, go, ok, 1; fail, nogo, nok, 0); add the word to accept or to reject if it is right`},
		{"usual words where accept turns one round", "part,a-1\n1,0\n2,1\n3,x\n", Settings{Accept: []string{"0"}, Reject: []string{"x"}},
			`calls.csv:3:2: found "1" in column 2 (a-1), expected accept (0) or reject (x), or a usual word for one of them (pass, go, ok, 1; fail, nogo, nok, 0); add the word to accept or to reject if it is right`},
		{"no word of accept occurs", "part,reference,a-1\n1,good,pass\n2,bad,fail\n", Settings{Accept: []string{"passs"}, Reject: []string{"fail"}},
			`calls.csv: found no call or reference "passs", which the setting accept lists, expected it somewhere in the table; did you mean pass? the table has bad, fail, good and pass`},
		{"no word of accept alone occurs", "part,value,a-1\n1,0.5,fine\n2,1.5,dent\n", Settings{Accept: []string{"keep", "use"}, Lower: ptr(1)},
			`calls.csv: found no call or reference one of keep and use, which the setting accept lists, expected it somewhere in the table; the table has dent and fine`},
		{"decimal comma without quotes", "part,value,a-1\n1,10,02,go\n2,-10,02,go\n3,10,go,go\n", Settings{},
			`calls.csv:2:4: found 4 fields, expected 3, as in the header; a decimal comma needs quotes, or semicolons between fields
calls.csv:3:4: found 4 fields, expected 3, as in the header; a decimal comma needs quotes, or semicolons between fields
calls.csv:4:4: found 4 fields, expected 3, as in the header; a separator inside a field needs quotes around the field`},
		{"missing columns", "part,call\n1,go\n", Settings{},
			`calls.csv:1: found no column "appraiser", expected it in the header line
calls.csv:1: found no column "trial", expected it in the header line; a study of one trial needs it too: 1 in each row`},
		{"no part", "\n# x\nappraiser,trial,call\na,1,go\n", Settings{}, `calls.csv:3: found no column "part", expected it in the header line`},
		{"column twice", "part,appraiser,trial,call,Call\n1,a,1,go,go\n", Settings{},
			`calls.csv:1:5: found the column "Call" a second time, expected each column once; it stands in column 4 already`},
		{"misspelt columns", "part,apraiser,trail,cal\n1,a,1,go\n", Settings{},
			`calls.csv:1:2: found the unknown column "apraiser", expected appraiser, call, part, reference, trial or value; did you mean appraiser? to leave the column out: --ignore apraiser, or ignore = ["apraiser"] in a study file
calls.csv:1:3: found the unknown column "trail", expected appraiser, call, part, reference, trial or value; did you mean trial? to leave the column out: --ignore trail, or ignore = ["trail"] in a study file
calls.csv:1:4: found the unknown column "cal", expected appraiser, call, part, reference, trial or value; did you mean call? to leave the column out: --ignore cal, or ignore = ["cal"] in a study file`},
		{"wide columns", "part,refrence,A,A-1,A 1,B-0\n1,go,go,go,go,go\n", Settings{},
			`calls.csv:1:2: found the column "refrence" without a trial number, expected part, reference, value or an appraiser's trial; did you mean reference? the column of an appraiser is named appraiser-trial, such as "refrence-1"; to leave the column out: --ignore refrence, or ignore = ["refrence"] in a study file
calls.csv:1:3: found the column "A" without a trial number, expected part, reference, value or an appraiser's trial; the column of an appraiser is named appraiser-trial, such as "A-1"; to leave the column out: --ignore A, or ignore = ["A"] in a study file
calls.csv:1:5: found the column "A 1" a second time, expected each column once; it stands in column 4 already
calls.csv:1:6: found the column "B-0", expected a trial number from 1 to 1000000`},
		{"long under other names", "Sample,Operator,Run,Result,Size\n1,a,1,go,2\n", Settings{},
			`calls.csv:1:1: found the unknown column "Sample", expected appraiser, call, part, reference, trial or value; if it holds the names of the parts, name it part; to leave the column out: --ignore Sample, or ignore = ["Sample"] in a study file
calls.csv:1:2: found the unknown column "Operator", expected appraiser, call, part, reference, trial or value; if it holds the names of the appraisers, name it appraiser; to leave the column out: --ignore Operator, or ignore = ["Operator"] in a study file
calls.csv:1:3: found the unknown column "Run", expected appraiser, call, part, reference, trial or value; if it holds the numbers of the trials, name it trial; to leave the column out: --ignore Run, or ignore = ["Run"] in a study file
calls.csv:1:4: found the unknown column "Result", expected appraiser, call, part, reference, trial or value; if it holds the calls, name it call; if it holds the measured values, name it value; to leave the column out: --ignore Result, or ignore = ["Result"] in a study file
calls.csv:1:5: found the unknown column "Size", expected appraiser, call, part, reference, trial or value; if it holds the measured values, name it value; to leave the column out: --ignore Size, or ignore = ["Size"] in a study file`},
		{"wide under other names", "Part No.,Measured (mm),Anna1\n1,2,go\n", Settings{},
			`calls.csv:1:1: found the column "Part No." without a trial number, expected part, reference, value or an appraiser's trial; if it holds the names of the parts, name it part; the column of an appraiser is named appraiser-trial, such as "Part No.-1"; to leave the column out: --ignore "Part No.", or ignore = ["Part No."] in a study file
calls.csv:1:2: found the column "Measured (mm)" without a trial number, expected part, reference, value or an appraiser's trial; if it holds the measured values, name it value; the column of an appraiser is named appraiser-trial, such as "Measured (mm)-1"; to leave the column out: --ignore "Measured (mm)", or ignore = ["Measured (mm)"] in a study file
calls.csv:1:3: found the column "Anna1" without a trial number, expected part, reference, value or an appraiser's trial; the column of an appraiser is named appraiser-trial, such as "Anna-1"; to leave the column out: --ignore Anna1, or ignore = ["Anna1"] in a study file`},
		{"a column that is there is not suggested", "part,sample,a-1\n1,2,go\n", Settings{Ignore: []string{"date"}},
			`calls.csv:1:2: found the column "sample" without a trial number, expected part, reference, value or an appraiser's trial; the column of an appraiser is named appraiser-trial, such as "sample-1"; to leave the column out: --ignore date,sample, or ignore = ["date", "sample"] in a study file`},
		{"appraisers who are called like a column", "part,Operator,Run,run-1\n1,2,3,go\n", Settings{},
			`calls.csv:1:2: found the column "Operator" without a trial number, expected part, reference, value or an appraiser's trial; the column of an appraiser is named appraiser-trial, such as "Operator-1"; to leave the column out: --ignore Operator, or ignore = ["Operator"] in a study file
calls.csv:1:3: found the column "Run" without a trial number, expected part, reference, value or an appraiser's trial; the column of an appraiser is named appraiser-trial, such as "Run-1"; to leave the column out: --ignore Run, or ignore = ["Run"] in a study file`},
		{"an appraiser's columns named alike", "part,ann,Ann,ben2\n1,go,go,go\n", Settings{},
			`calls.csv:1: found no column with calls, expected either the columns appraiser, trial and call, or a column for each appraiser and trial, such as "early-1"
calls.csv:1:2: found the column "ann" without a trial number, expected part, reference, value or an appraiser's trial; the column of an appraiser is named appraiser-trial, such as "ann-1"; to leave the column out: --ignore ann, or ignore = ["ann"] in a study file
calls.csv:1:3: found the column "Ann" without a trial number, expected part, reference, value or an appraiser's trial; the column of an appraiser is named appraiser-trial, such as "Ann-2"; to leave the column out: --ignore Ann, or ignore = ["Ann"] in a study file
calls.csv:1:4: found the column "ben2" without a trial number, expected part, reference, value or an appraiser's trial; the column of an appraiser is named appraiser-trial, such as "ben-2"; to leave the column out: --ignore ben2, or ignore = ["ben2"] in a study file`},
		{"a row for each trial, a column for each appraiser", "part,trial,ann\n1,1,go\n", Settings{},
			`calls.csv:1:2: found the column trial without appraiser and call, expected one call a row, with part, appraiser, trial and call, or one part a row, with a column for each appraiser and trial, such as "early-1"
calls.csv:1:3: found the unknown column "ann", expected appraiser, call, part, reference, trial or value; to leave the column out: --ignore ann, or ignore = ["ann"] in a study file`},
		{"measured values as the reference", "part,reference,a-1\n1,10.02,go\n2,9.5,og\n3,9.50,go\n", Settings{},
			`calls.csv:2:2: found "10.02" and other numbers (3 times) in column 2 (reference), expected ` + unknown + `; if the column holds measured values, name it value; the reference then follows from --lower and --upper
calls.csv:3:3: found "og" in column 3 (a-1), expected ` + unknown + `; did you mean go? Else ` + settingsHint},
		{"column without a name", ",part,appraiser,trial,call\n0,1,a,1,go\n", Settings{}, "calls.csv:1:1: column 1 has no name; name it, or take it out of the table"},
		{"no column of calls", "part,reference\n1,go\n", Settings{},
			`calls.csv:1: found no column with calls, expected either the columns appraiser, trial and call, or a column for each appraiser and trial, such as "early-1"`},
		{"other separator", "part|appraiser|trial|call\n1|a|1|go\n", Settings{},
			`calls.csv:1:1: found one column, "part|appraiser|trial|call", expected several, separated by comma, semicolon or tab; the first line that is not blank and no comment (#) is the header`},
		{"two references", "part,appraiser,trial,call,reference\n1,a,1,go,go\n1,a,2,go,pass\n\n1,a,3,go,no\n1,a,4,go,no\n", Settings{},
			`calls.csv:5:5: found the reference "no" of part "1", expected "go", as on line 2; a part has one reference`},
		{"two values", "part,appraiser,trial,call,value\n1,a,1,go,\n1,a,2,go,1.0\n1,a,3,go,1\n1,a,4,go,1.5\n1,a,5,go,1.5\n", Settings{},
			`calls.csv:5:5: found the value 1.5 of part "1", expected 1.0, as on line 3; a part has one value`},
		{"values that are none", "part,value,a-1\n1,1.0 mm,go\n2,\"1,5\",go\n3,nan,go\n4,1e999,go\n5,\"1,234.5\",go\n6,0x10,go\n", Settings{},
			`calls.csv:2:2: found "1.0 mm" as the value of part "1", expected a number; write the number alone, without unit
calls.csv:3:2: found "1,5" as the value of part "2", expected a number; in a table separated by commas the decimal separator is a point
calls.csv:4:2: found "nan" as the value of part "3", expected a number; leave the field empty where there is no value
calls.csv:5:2: found "1e999" as the value of part "4", expected a number; the number is too large (expected at most 1e100 in size)
calls.csv:6:2: found "1,234.5" as the value of part "5", expected a number; write the number without separators of thousands
calls.csv:7:2: found "0x10" as the value of part "6", expected a number; write the number alone, without unit`},
		{"a call twice", "part,appraiser,trial,call\n1,a,1,go\n2,a,1,go\n1,a,01,no\n1,a,1.0,\n1,a,1,go\n", Settings{},
			`calls.csv:4:4: found the call of "a" on part "1" in trial 1 a second time, expected each call once; it stands on line 2 already
calls.csv:6:4: found the call of "a" on part "1" in trial 1 a second time, expected each call once; it stands on line 2 already`},
		{"a part twice", "part,a-1\n1,go\n2,go\n1,no\n1,no\n", Settings{},
			`calls.csv:4:1: found the part "1" a second time, expected each part once; it stands on line 2 already
calls.csv:5:1: found the part "1" a second time, expected each part once; it stands on line 2 already`},
		{"a part twice with words that mean nothing", "part,reference,a-1\n1,go,go\n1,oops,oops\n1,go,what\n", Settings{},
			`calls.csv:3:1: found the part "1" a second time, expected each part once; it stands on line 2 already
calls.csv:3:2: found "oops" (2 times) in column 2 (reference), expected accept or reject, or a usual word for one of them (pass, go, ok, 1; fail, nogo, nok, 0); say what other words mean with --accept and --reject, or list kinds with --categories, grades with --order
calls.csv:4:1: found the part "1" a second time, expected each part once; it stands on line 2 already
calls.csv:4:3: found "what" in column 3 (a-1), expected accept or reject, or a usual word for one of them (pass, go, ok, 1; fail, nogo, nok, 0); say what other words mean with --accept and --reject, or list kinds with --categories, grades with --order`},
		{"appraiser without calls, wide", "part,a-1,b-1,b-2\n1,go,,\n", Settings{},
			`calls.csv:1:3: found the appraiser "b" without any call, expected one call or more of each appraiser; take the appraiser out of the table if there are none`},
		{"appraiser without calls, long", "part,appraiser,trial,call\n1,a,1,go\n1,b,1,\n", Settings{},
			`calls.csv:3:2: found the appraiser "b" without any call, expected one call or more of each appraiser; take the appraiser out of the table if there are none`},
		{"no rows", "part,a-1\n# 1,go\n\n", Settings{}, "calls.csv:1: no rows stand below the header; lines that begin with # are comments"},
		{"no calls", "part,a-1\n1,\n", Settings{}, "calls.csv:1: the table holds no call: every field for a call is empty"},
		{"nothing", "", Settings{}, "calls.csv: the file holds no table: expected a header line and rows"},
		{"rows of other lengths", "part,a-1\n1\n2,go,go\n3,go,,\n,go\n,\n", Settings{},
			`calls.csv:2: found 1 field, expected 2, as in the header; a missing call is an empty field
calls.csv:3:3: found 3 fields, expected 2, as in the header; a separator inside a field needs quotes around the field
calls.csv:5:1: found no part, expected a name`},
		{"appraisers and trials", "part,appraiser,trial,call\n1,,1,go\n1,a,,go\n1,a,0,go\n1,a,1.5,go\n1,a,T2,go\n1,a,1000001,go\n", Settings{},
			`calls.csv:2:2: found no appraiser, expected a name
calls.csv:3:3: found nothing, expected a trial number from 1 to 1000000
calls.csv:4:3: found "0", expected a trial number from 1 to 1000000
calls.csv:5:3: found "1.5", expected a trial number from 1 to 1000000
calls.csv:6:3: found "T2", expected a trial number from 1 to 1000000; write the number alone
calls.csv:7:3: found "1000001", expected a trial number from 1 to 1000000`},
		{"quote inside a field", "part,a-1\n2,go\n1\" pipe,go\n", Settings{},
			`calls.csv:3: found a quote (") in byte 2 of the line, inside a field that does not begin with one, expected the whole field in quotes and each quote in it doubled, as in "12"" pipe"`},
		{"quote without end", "part,a-1\n\"1,go\n2,go\n", Settings{},
			`calls.csv:2: found a field in quotes (") that does not end, or has a single quote inside, expected a closing quote before the separator, and each quote inside doubled`},
		{"reference against value and limits", "part,reference,value,a-1\n1,go,0.5,go\n2,nogo,1.5,go\n3,go,1,go\n4,go,2,no\n5,,7,no\n", Settings{Lower: ptr(1), Upper: ptr(2)},
			`calls.csv:2:2: found 2 parts with a reference other than value and limits tell: "1", "2", expected good inside the limits or on them, bad outside; correct the reference, the value or the limits, or leave the column reference out`},
		{"settings", "part,a-1\n1,go\n", Settings{Lower: ptr(2), Upper: ptr(1), Accept: []string{"x"}, Reject: []string{"X"}},
			`setting reject: "X" stands in both accept and reject
setting upper: lower is 2 and upper is 1; lower must be less than upper`},
		{"old workbook", "\xd0\xcf\x11\xe0aaaa", Settings{}, "calls.csv: this is an old .xls workbook or one with a password; save it as .xlsx without a password, or as CSV"},
		{"no text", "part\x00\x00\x01\x02", Settings{}, "calls.csv: this is no text file; expected calls as CSV or .xlsx"},
		{"two encodings", "part,a-1\n\xc3\xa9,go\n\xe9,go\n", Settings{},
			"calls.csv:3: found the byte 0xe9, expected UTF-8, as the text before is; save the file in one encoding, UTF-8 at best"},
	} {
		t.Run(c.name, func(t *testing.T) {
			for _, chunk := range []int{16, 0} {
				_, err := Read(Source{Path: "-", Stdin: strings.NewReader(c.in), chunk: chunk}, c.settings)
				var p *Problems
				if !errors.As(err, &p) {
					t.Fatalf("error %v, want *Problems", err)
				}
				got := strings.ReplaceAll(err.Error(), StdinName, "calls.csv")
				if d := cmp.Diff(c.want, got); d != "" {
					t.Errorf("chunks of %d bytes: %s", chunk, d)
				}
			}
		})
	}
}

func TestManyProblems(t *testing.T) {
	in := "part,a-1\n" + strings.Repeat("1\n", 50000)
	for _, chunk := range []int{64, 0} {
		_, err := Read(Source{Path: "-", Stdin: strings.NewReader(in), chunk: chunk}, Settings{})
		var p *Problems
		if !errors.As(err, &p) || len(p.List) != 20 || p.List[19].Line != 21 || p.More != 50000-20 {
			t.Fatalf("%v", err)
		}
	}
	// Calls given twice are more than the list holds while it is made.
	in = "part,appraiser,trial,call\n" + strings.Repeat("1,a,1,go\n", 50001)
	_, err := Read(Source{Path: "-", Stdin: strings.NewReader(in)}, Settings{})
	var p *Problems
	if !errors.As(err, &p) || len(p.List) != 20 || p.List[0].Line != 3 || p.List[19].Line != 22 || p.More != 50000-20 {
		t.Fatalf("%v", err)
	}
}

// What is wrong with a table, and how often, does not depend on how its text is
// cut: whichever rows are read together.
func TestProblemsHoweverCut(t *testing.T) {
	field := func(of string) *rapid.Generator[string] { return rapid.SampledFrom(strings.Split(of, "|")) }
	const parts, calls, values = "1|1|2|2|3| 1|1.0|x|X|é|", "go|go|nogo|dent|huh|Huh| go|1|-|n/a|", "1,5|1.5|1,50|2.5|oops|n/a||\"7\""
	header := map[bool]string{
		true:  "part;appraiser;trial;call;reference;value\n",
		false: "part;a-1;a-2;b-1;reference;value\n",
	}
	columns := map[bool][]string{
		true:  {parts, "a|a|A|b| b|", "1|1|2|3|two|0|1.0", calls, calls, values},
		false: {parts, calls, calls, calls, calls, values},
	}
	rapid.Check(t, func(t *rapid.T) {
		long := rapid.Bool().Draw(t, "long")
		var b strings.Builder
		b.WriteString(header[long])
		for range rapid.IntRange(0, 12).Draw(t, "rows") {
			switch rapid.IntRange(0, 15).Draw(t, "kind of row") {
			case 0:
				b.WriteString(field("|#|;;;;;|;|1;2|1;2;3;4;5;6;7|\"|  \r").Draw(t, "row"))
			default:
				for i, of := range columns[long] {
					if i > 0 {
						b.WriteByte(';')
					}
					b.WriteString(field(of).Draw(t, "field"))
				}
			}
			b.WriteByte('\n')
		}
		which := rapid.SampledFrom(fuzzSettings).Draw(t, "settings")
		read := func(chunk int) (*Study, error) {
			return Read(Source{Path: "-", Stdin: strings.NewReader(b.String()), chunk: chunk}, which)
		}
		want, wantErr := read(0)
		for _, chunk := range []int{16, 40, 100} {
			got, err := read(chunk)
			if d := cmp.Diff(want, got, sameStudy); d != "" {
				t.Fatalf("chunks of %d bytes of %q: %s", chunk, b.String(), d)
			}
			if wantErr != nil && wantErr.Error() != err.Error() {
				t.Fatalf("chunks of %d bytes of %q: %v\nwhole: %v", chunk, b.String(), err, wantErr)
			}
		}
	})
}
