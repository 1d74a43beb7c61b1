package study

import (
	"slices"
	"strings"
	"testing"

	"samecall/agreement"
)

// A field of the column reference that is left blank takes no reference from a
// part that was measured.
func TestBlankReference(t *testing.T) {
	const in = "part,reference,value,a-1\n1,bad,8,go\n2,,9,go\n3,,10,go\n4,good,,go\n5,,,go\n"
	s := read(t, in, Settings{Lower: ptr(9.5)})
	var got []agreement.Category
	for p := range s.Parts {
		got = append(got, s.Ratings.Reference(p))
	}
	if want := []agreement.Category{0, 0, 1, 1, agreement.Missing}; !slices.Equal(got, want) {
		t.Errorf("reference %v, want %v", got, want)
	}
	if s.Reference != Given || s.DerivedParts != 2 {
		t.Errorf("reference %v, of %d parts derived", s.Reference, s.DerivedParts)
	}
	want := []Note{
		{"completed_reference", "2 parts without a given reference: theirs follows from value and limits."},
		{"partial_reference", "1 of 5 parts is without a reference; calls on such parts count for agreement only."},
	}
	if !slices.Equal(s.Notes, want) {
		t.Errorf("notes %q", s.Notes)
	}

	s = read(t, in, Settings{}) // no limits, nothing follows
	if s.DerivedParts != 0 || s.Ratings.Reference(1) != agreement.Missing {
		t.Errorf("without limits: of %d parts derived", s.DerivedParts)
	}
	if n := s.Notes[len(s.Notes)-1].Text; n != "3 of 5 parts are without a reference; calls on such parts count for agreement only." {
		t.Errorf("without limits: %q", n)
	}

	_, err := Read(Source{Path: "-", Stdin: strings.NewReader(in)}, Settings{Lower: ptr(7)})
	if err == nil || !strings.Contains(err.Error(), `found 1 part with a reference other than value and limits tell: "1"`) {
		t.Errorf("given and derived disagree: %v", err)
	}
}

func TestEmptyColumns(t *testing.T) {
	s := read(t, "part,reference,value,a-1\n1,,,go\n2,,,nogo\n", Settings{})
	want := []Note{
		{"empty_column", "The column reference is there, but every field of it is empty."},
		{"empty_column", "The column value is there, but every field of it is empty."},
	}
	if !slices.Equal(s.Notes, want) {
		t.Errorf("notes %q", s.Notes)
	}
}
