package study

import (
	"fmt"
	"slices"
	"strings"
	"unicode"
)

// otherNames are the names that other tables give to our columns, in the
// languages we know them in. Common practice, no source. They are not taken
// for the column: the error says what to rename.
var otherNames = map[string][]string{
	"part": {"parts", "sample", "item", "piece", "workpiece", "specimen", "serial", "sn", "id", "no", "nr", "number",
		"teil", "muster", "prüfling", "werkstück", "pièce", "échantillon", "pieza", "pezzo"},
	"appraiser": {"operator", "inspector", "rater", "evaluator", "assessor", "examiner", "observer", "tester", "judge", "person", "shift",
		"prüfer", "bediener", "opérateur", "contrôleur", "operador", "operatore"},
	"trial": {"trials", "run", "repeat", "repetition", "replicate", "replication", "round", "attempt", "session",
		"wiederholung", "durchgang", "versuch", "essai", "répétition", "ensayo", "prova"},
	"call": {"calls", "decision", "verdict", "judgement", "judgment", "rating", "assessment", "result", "outcome", "response", "evaluation", "status", "attribute",
		"entscheidung", "urteil", "bewertung", "ergebnis", "résultat", "décision", "resultado", "risultato"},
	"reference": {"ref", "standard", "truth", "true", "known", "expert", "master", "referenz", "référence", "referencia", "riferimento"},
	"value": {"values", "measured", "measurement", "measure", "reading", "size", "dimension", "diameter", "length", "result",
		"wert", "messwert", "meßwert", "istwert", "maß", "mass", "mesure", "valeur", "medida", "valor", "misura", "valore"},
}

// columnHolds says what each column holds.
var columnHolds = map[string]string{
	"part": "the names of the parts", "appraiser": "the names of the appraisers", "trial": "the numbers of the trials", "call": "the calls",
	"reference": "what the parts truly are", "value": "the measured values",
}

// alsoCalled returns the columns that a name may mean, of those named: by the
// whole name without what stands in brackets, else by one of its words.
func alsoCalled(name string, columns []string) []string {
	name, _, _ = strings.Cut(fold(name), "(")
	name, _, _ = strings.Cut(name, "[")
	words := strings.FieldsFunc(name, func(r rune) bool { return !unicode.IsLetter(r) })
	for _, tried := range append([]string{strings.Join(words, " ")}, words...) {
		var out []string
		for _, c := range columns {
			if tried == c || slices.Contains(otherNames[c], tried) {
				out = append(out, c)
			}
		}
		if len(out) > 0 {
			return out
		}
	}
	return nil
}

// rename says how a column is to be named if it holds what its name may mean.
func rename(columns []string) string {
	var out []string
	for _, c := range columns {
		out = append(out, fmt.Sprintf("if it holds %s, name it %s", columnHolds[c], c))
	}
	return strings.Join(out, "; ")
}
