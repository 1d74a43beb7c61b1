package study

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"
	"sync"

	"samecall/agreement"
)

// merge makes one Study of what the builders hold.
type merge struct {
	*table
	settings Settings
	study    *Study
	words    *vocabulary
	unknown  map[string]*sighting   // words without a meaning
	meaning  [][]agreement.Category // of each builder's words, by number plus 1; [0] is Missing
	columns  [][]int32              // of each builder's columns, the column in Ratings; −1: none
	rank     [][]uint32             // of each builder's parts, the part in Ratings
	suspect  map[uint32]bool        // parts of which two rows say different things
	more     int
}

// noCategory marks a word without a meaning.
const noCategory agreement.Category = agreement.Missing - 1

func (t *table) study(s Settings) (*Study, []Problem, int) {
	m := &merge{table: t, settings: s, study: &Study{Settings: s}, suspect: make(map[uint32]bool)}
	for _, b := range t.builders {
		m.problems = append(m.problems, b.problems...)
		m.more += b.more
	}
	m.notRead()
	m.unusedSettings()
	m.mergeWords()
	m.mergeParts()
	m.unknownWords()
	trials := m.mergeColumns()
	m.contradictions()
	if trials != nil {
		m.fill(trials)
	}
	if len(m.problems) > 0 {
		return nil, m.problems, m.more
	}
	m.rareWords()
	m.similarAppraisers()
	m.farValues()
	m.emptyColumns()
	m.setReference()
	if len(m.problems) > 0 {
		return nil, m.problems, m.more
	}
	return m.study, nil, 0
}

// add keeps a problem; of very many, the first by line.
func (m *merge) add(p Problem) {
	if m.problems = append(m.problems, p); len(m.problems) == 1<<12 {
		slices.SortFunc(m.problems, Problem.compare)
		m.more += len(m.problems) - maxProblems
		m.problems = m.problems[:maxProblems]
	}
}

func (m *merge) note(code, format string, args ...any) {
	m.study.Notes = append(m.study.Notes, Note{code, fmt.Sprintf(format, args...)})
}

// notRead notes what the file holds that is not read.
func (m *merge) notRead() {
	if len(m.others) > 0 {
		m.note("other_sheets", "The sheet read is %s; %s, too. The setting sheet names the one to read.", quote(m.sheet),
			listOf(firstFew(m.others), "and")+either(len(m.others), " holds something", " hold something"))
	}
}

// emptyColumns notes a column reference or value in which nothing stands.
func (m *merge) emptyColumns() {
	empty := func(name string) {
		m.note("empty_column", "The column %s is there, but every field of it is empty.", name)
	}
	if m.layout.reference >= 0 && !slices.ContainsFunc(m.builders, func(b *builder) bool { return b.hasReference() }) {
		empty("reference")
	}
	if m.layout.value >= 0 && m.study.Values == nil {
		empty("value")
	}
}

func (b *builder) hasReference() bool {
	for id := range b.parts.n {
		if b.parts.entry(id).ref != 0 {
			return true
		}
	}
	return false
}

// unusedSettings notes settings that name something that is not there.
func (m *merge) unusedSettings() {
	header := make(map[string]bool)
	for _, h := range m.layout.header {
		header[fold(h)] = true
	}
	for _, name := range m.settings.Ignore {
		if header[fold(name)] {
			continue
		}
		hint := "."
		if near := nearest(name, m.layout.header); near != "" {
			hint = "; did you mean " + shown(near) + "?"
		}
		m.note("unknown_ignore", "The setting ignore names the column %s, which the table does not have%s", quote(name), hint)
	}
	if m.settings.Sheet != "" && m.sheet == "" {
		m.note("no_sheet", "The setting sheet names %s, but the calls are text, not a workbook: it changes nothing.", quote(m.settings.Sheet))
	}
}

// spelt returns the smallest spelling of each word, by its folded form.
func (m *merge) spelt() map[string]string {
	spelt := make(map[string]string)
	for _, b := range m.builders {
		for _, sp := range b.words.spellings {
			w, text := b.words.list[sp.id], string(sp.text)
			if was, ok := spelt[w]; !ok || text < was {
				spelt[w] = text
			}
		}
	}
	return spelt
}

// mergeWords gives the words of all builders their meaning.
func (m *merge) mergeWords() {
	spelt := m.spelt()
	v := newVocabulary(m.settings, spelt)
	m.words = v
	m.study.Categories, m.study.PassFail = v.names, v.passFail
	problems, notes := absent(m.settings, spelt)
	for _, p := range problems {
		m.add(p)
	}
	m.study.Notes = slices.Concat(m.study.Notes, notes, v.notes)
	if p, ok := v.tooMany(); ok {
		p.Line = m.line
		m.add(p)
	}
	m.unknown = make(map[string]*sighting)
	for _, b := range m.builders {
		meaning := []agreement.Category{agreement.Missing}
		for _, w := range b.words.list {
			c, ok := v.of[w]
			if !ok {
				c = noCategory
				if len(v.names) <= agreement.MaxCategories {
					m.unknown[w] = &sighting{}
				}
			}
			meaning = append(meaning, c)
		}
		m.meaning = append(m.meaning, meaning)
	}
}

// unknownWords makes a problem of each word without a meaning.
func (m *merge) unknownWords() {
	if len(m.unknown) == 0 {
		return
	}
	m.sight(m.unknown)
	spelt := m.spelt()
	m.measuredReferences(m.unknown, spelt)
	for w, at := range m.unknown {
		p := m.words.unknown(spelt[w])
		p.Line, p.Column = at.line, at.field+1
		if at.count > 1 {
			p.Found += fmt.Sprintf(" (%d times)", at.count)
		}
		p.Found += " in " + m.layout.place(at.field)
		m.add(p)
	}
}

// measuredReferences takes numbers out that stand first in the column
// reference, and makes one problem of them: they may be measured values.
func (m *merge) measuredReferences(unknown map[string]*sighting, spelt map[string]string) {
	var first *sighting
	word, count := "", 0
	for w, at := range unknown {
		if at.field != m.layout.reference || !strings.ContainsAny(w, decimalSigns) || !isNumber(w) {
			continue
		}
		if first == nil || at.line < first.line {
			first, word = at, w
		}
		count += at.count
		delete(unknown, w)
	}
	if first == nil {
		return
	}
	found := quote(spelt[word])
	if count > 1 {
		found += fmt.Sprintf(" and other numbers (%d times)", count)
	}
	m.add(Problem{Line: first.line, Column: first.field + 1, Found: found + " in " + m.layout.place(first.field), Expected: m.words.expected,
		Text: "if the column holds measured values, name it value; the reference then follows from --lower and --upper"})
}

// sighting is where a word stands first, and how often it is said: in how
// many calls, and of how many parts as the reference, which each row may repeat.
type sighting struct{ line, field, count int }

// see takes a place of the word, and whether it adds to the count.
func (s *sighting) see(line, field int, counts bool) {
	if s.count == 0 || line < s.line || line == s.line && field < s.field {
		s.line, s.field = line, field
	}
	if counts {
		s.count++
	}
}

// sight looks through all calls and references for words.
func (m *merge) sight(words map[string]*sighting) {
	type reference struct {
		part uint32
		word *sighting
	}
	seen := make(map[reference]bool)
	for k, b := range m.builders {
		see := func(s *sighting, part, row uint32) {
			r := reference{m.rank[k][part], s}
			s.see(b.line(row), b.layout.reference, !seen[r])
			seen[r] = true
		}
		local := make([]*sighting, len(b.words.list)+1)
		for i, w := range b.words.list {
			local[i+1] = words[w]
		}
		b.eachRecord(func(row uint32, r record) {
			if s := local[r.word]; s != nil {
				s.see(b.line(row), b.field(r), true)
			}
		})
		for id := range b.parts.n {
			e := b.parts.entry(id)
			if s := local[e.ref]; s != nil {
				see(s, id, b.refRow(id, e))
			}
		}
		for _, a := range b.refs {
			if s := local[a.word+1]; s != nil {
				see(s, a.part, a.row)
			}
		}
	}
}

func (b *builder) eachRecord(do func(row uint32, r record)) {
	per, i := b.perRow(), 0
	b.records.each(func(r record) {
		do(uint32(i/per), r)
		i++
	})
}

// mergeColumns puts appraisers in natural order and their trials in the order
// of their numbers. It returns the number of trials of each appraiser, nil if
// nobody made a call.
func (m *merge) mergeColumns() []int {
	type seen struct {
		called map[int]bool // by trial: whether there is a call
		line   int          // where the appraiser stands first
		field  int
	}
	all := make(map[string]*seen)
	for _, b := range m.builders {
		for i, key := range b.columns {
			name := b.appraisers.list[key.appraiser]
			at := all[name]
			line, field := m.line, 0
			if b.layout.long {
				line, field = b.line(b.first[i]), b.layout.appraiser
			} else {
				field = b.layout.cells[i].field
			}
			if at == nil {
				at = &seen{make(map[int]bool), line, field}
				all[name] = at
			}
			if line < at.line {
				at.line = line
			}
			at.called[int(key.trial)] = at.called[int(key.trial)] || b.called[i]
		}
	}
	var appraisers []string
	for name := range all {
		appraisers = append(appraisers, name)
	}
	slices.SortFunc(appraisers, compareNatural)

	var trials []int
	var silent []string
	index := make(map[string]map[int]int32) // column by appraiser and trial
	n := int32(0)
	for _, name := range appraisers {
		at := all[name]
		var numbers, without []int
		for t, called := range at.called {
			if called {
				numbers = append(numbers, t)
			} else {
				without = append(without, t)
			}
		}
		if len(numbers) == 0 {
			silent = append(silent, name)
			continue
		}
		slices.Sort(numbers)
		slices.Sort(without)
		index[name] = make(map[int]int32)
		for _, t := range numbers {
			index[name][t] = n
			n++
		}
		trials = append(trials, len(numbers))
		m.study.Appraisers = append(m.study.Appraisers, name)
		m.study.TrialNames = append(m.study.TrialNames, numbers)
		if len(without) > 0 {
			m.note("empty_trial", "Appraiser %s has no call in trial %s, which is left out.", quote(name), joinInts(without))
		}
	}
	switch {
	case len(trials) == 0 && len(m.problems) > 0: // rows were left out
	case len(trials) == 0 && !slices.ContainsFunc(m.builders, func(b *builder) bool { return b.rows > 0 }):
		p := Problem{Line: m.line, Text: "no rows stand below the header"}
		if m.sheet == "" {
			p.Text += "; lines that begin with # are comments"
		}
		m.add(p)
	case len(trials) == 0:
		m.add(Problem{Line: m.line, Text: "the table holds no call: every field for a call is empty"})
	case len(trials) > 0:
		for _, name := range silent {
			m.add(Problem{Line: all[name].line, Column: all[name].field + 1, Found: "the appraiser " + quote(name) + " without any call",
				Expected: "one call or more of each appraiser", Text: "take the appraiser out of the table if there are none"})
		}
	}
	for _, b := range m.builders {
		local := make([]int32, len(b.columns))
		for i, key := range b.columns {
			local[i] = -1
			if c, ok := index[b.appraisers.list[key.appraiser]][int(key.trial)]; ok {
				local[i] = c
			}
		}
		m.columns = append(m.columns, local)
	}
	return trials
}

func joinInts(n []int) string {
	var s []string
	for _, i := range n {
		s = append(s, fmt.Sprint(i))
	}
	return listOf(s, "and")
}

// mergeParts puts the parts of all builders in one natural order.
//
// Each builder's parts are sorted first, side by side; mostly they come
// sorted. The merge then needs no table.
func (m *merge) mergeParts() {
	k := len(m.builders)
	sorted := make([][]keyed, k)
	numbers := make([][]float64, k)
	names := make([]func(uint32) string, k)
	var wg sync.WaitGroup
	for i, b := range m.builders {
		m.rank = append(m.rank, make([]uint32, b.parts.n))
		wg.Go(func() {
			names[i] = b.parts.strings()
			sorted[i] = sortNatural(int(b.parts.n), names[i])
			numbers[i] = b.numbersOf()
		})
	}
	wg.Wait()

	total := countKeys(sorted)
	parts := make([]string, 0, total)
	var values []float64
	var hasValue []bool
	if m.layout.value >= 0 {
		values, hasValue = make([]float64, 0, total), make([]bool, 0, total)
	}
	anyValue := false
	head := make([]int, k)
	alike := newAlike("parts")
	var last keyed
	for {
		best := -1
		var bestName string
		for i := range k {
			if head[i] == len(sorted[i]) {
				continue
			}
			if best < 0 {
				best = i
				continue
			}
			c := sorted[i][head[i]].compare(sorted[best][head[best]])
			if c == 0 {
				if bestName == "" {
					bestName = names[best](sorted[best][head[best]].id)
				}
				c = compareNatural(names[i](sorted[i][head[i]].id), bestName)
			}
			if c < 0 {
				best, bestName = i, ""
			}
		}
		if best < 0 {
			break
		}
		key := sorted[best][head[best]]
		name := names[best](key.id)
		part := uint32(len(parts))
		if part > 0 && key.compare(last) == 0 {
			alike.consider(parts[part-1], name)
		}
		last = key
		value, has, ref := 0.0, false, agreement.Missing
		rows := 0
		for i := best; i < k; i++ {
			if head[i] == len(sorted[i]) || i > best && (sorted[i][head[i]].compare(key) != 0 || names[i](sorted[i][head[i]].id) != name) {
				continue
			}
			id := sorted[i][head[i]].id
			head[i]++
			m.rank[i][id] = part
			e := m.builders[i].parts.entry(id)
			if rows++; rows > 1 && !m.layout.long {
				m.suspect[part] = true
			}
			if e.ref != 0 {
				c := m.meaning[i][e.ref]
				if ref != agreement.Missing && c != ref {
					m.suspect[part] = true
				}
				ref = c
			}
			if e.valueLen > 0 {
				x := numbers[i][id]
				if math.IsNaN(x) || has && x != value {
					m.suspect[part] = true
				}
				if !has {
					value, has = x, true
				}
			}
		}
		parts = append(parts, name)
		if values != nil {
			values, hasValue = append(values, value), append(hasValue, has)
			anyValue = anyValue || has
		}
	}
	m.study.Parts = parts
	if anyValue {
		m.study.Values, m.study.HasValue = values, hasValue
	}
	m.study.Notes = append(m.study.Notes, alike.notes()...)
	m.decimalSigns()
	for i, b := range m.builders {
		for _, list := range [][]again{b.refs, b.values, b.doubled} {
			for _, a := range list {
				m.suspect[m.rank[i][a.part]] = true
			}
		}
	}
}

// decimalSigns notes values of a text of which some have a decimal comma and
// some a point: one of the two may separate thousands. A workbook stores its
// numbers with points, whatever it shows.
func (m *merge) decimalSigns() {
	var first [len(decimalSigns)]string
	var lines [len(decimalSigns)]int
	for _, b := range m.builders {
		for i, s := range b.signs {
			if line := b.line(s.row); s.text != "" && (first[i] == "" || line < lines[i]) {
				first[i], lines[i] = s.text, line
			}
		}
	}
	if first[0] != "" && first[1] != "" && m.sheet == "" {
		m.note("decimal_signs", "The values have both decimal commas (%s on line %d) and points (%s on line %d); each is read as a decimal sign. Is none of them a separator of thousands?",
			quote(first[0]), lines[0], quote(first[1]), lines[1])
	}
}

// countKeys returns how many different keys the sorted lists have: the number
// of parts, or nearly.
func countKeys(sorted [][]keyed) int {
	n, head := 0, make([]int, len(sorted))
	for {
		var least *keyed
		for i, list := range sorted {
			if head[i] < len(list) && (least == nil || list[head[i]].compare(*least) < 0) {
				least = &list[head[i]]
			}
		}
		if least == nil {
			return n
		}
		n++
		for i, list := range sorted {
			if head[i] < len(list) && list[head[i]].compare(*least) == 0 {
				head[i]++
			}
		}
	}
}

// numbersOf returns the values of a builder's parts as numbers, NaN where there
// is none or where it is not a number; nil if the table has no values.
func (b *builder) numbersOf() []float64 {
	if b.layout.value < 0 {
		return nil
	}
	x := make([]float64, b.parts.n)
	for id := range x {
		var err error
		e := b.parts.entry(uint32(id))
		text := b.parts.value(e)
		if x[id], err = parseNumber(text, b.comma); err != nil {
			x[id] = math.NaN()
		} else if b.comma {
			b.seeSigns(text, b.valueRow(uint32(id), e))
		}
	}
	return x
}

// strings returns the names by number, as parts of one string a block.
func (t *partTable) strings() func(uint32) string {
	blocks := make([]string, len(t.blocks))
	for i, b := range t.blocks {
		blocks[i] = string(b)
	}
	return func(id uint32) string {
		e := t.entry(id)
		at := e.at & (1<<blockBits - 1)
		return blocks[e.at>>blockBits][at : at+uint32(e.nameLen)]
	}
}

// statement is what one row says of a part.
type statement struct {
	line  int
	ref   agreement.Category
	word  string
	value string
	row   bool // the part has a row of a wide table here
}

// contradictions looks at the parts of which two rows say different things.
// What it finds does not depend on which builder read which row: of each part
// the earliest line counts, and the first line that contradicts it.
func (m *merge) contradictions() {
	if len(m.suspect) == 0 {
		return
	}
	said := make(map[uint32][]statement)
	for i, b := range m.builders {
		word := func(w uint16) string { return b.words.list[w] }
		for id := range b.parts.n {
			part := m.rank[i][id]
			if !m.suspect[part] {
				continue
			}
			e := b.parts.entry(id)
			said[part] = append(said[part], statement{line: b.line(e.row), ref: agreement.Missing, row: true})
			if e.ref != 0 {
				said[part] = append(said[part], statement{line: b.line(b.refRow(id, e)), ref: m.meaning[i][e.ref], word: word(e.ref - 1)})
			}
			if e.valueLen > 0 {
				said[part] = append(said[part], statement{line: b.line(b.valueRow(id, e)), ref: agreement.Missing, value: string(b.parts.value(e))})
			}
		}
		for _, a := range b.refs {
			said[m.rank[i][a.part]] = append(said[m.rank[i][a.part]], statement{line: b.line(a.row), ref: m.meaning[i][a.word+1], word: word(a.word)})
		}
		for _, a := range b.values {
			said[m.rank[i][a.part]] = append(said[m.rank[i][a.part]], statement{line: b.line(a.row), ref: agreement.Missing, value: string(a.value)})
		}
		for _, a := range b.doubled {
			said[m.rank[i][a.part]] = append(said[m.rank[i][a.part]], statement{line: b.line(a.row), ref: agreement.Missing, row: true})
		}
	}
	for part, list := range said {
		slices.SortStableFunc(list, func(a, b statement) int { return cmp.Compare(a.line, b.line) })
		m.contradiction(m.study.Parts[part], list)
	}
}

func (m *merge) contradiction(part string, list []statement) {
	var row, ref, value *statement
	var refDone, valueDone bool
	for i := range list {
		s := &list[i]
		switch {
		case s.row && row == nil:
			row = s
		case s.row && !m.layout.long:
			m.add(Problem{Line: s.line, Column: m.layout.part + 1, Found: "the part " + quote(part) + " a second time",
				Expected: "each part once", Text: "it stands " + m.on(row.line) + " already"})
		case s.word != "" && s.ref == noCategory: // is a problem already
		case s.word != "" && ref == nil:
			ref = s
		case s.word != "" && s.ref != ref.ref && !refDone:
			refDone = true
			m.add(Problem{Line: s.line, Column: m.layout.reference + 1, Found: fmt.Sprintf("the reference %s of part %s", quote(s.word), quote(part)),
				Expected: quote(ref.word) + ", as " + m.on(ref.line), Text: "a part has one reference"})
		case s.value != "":
			x, err := parseNumber([]byte(s.value), m.builders[0].comma)
			if valueDone {
				continue
			}
			if err != nil {
				valueDone = true
				if blankWords[fold(s.value)] {
					err = errNoValue
				}
				m.add(Problem{Line: s.line, Column: m.layout.value + 1, Found: quote(s.value) + " as the value of part " + quote(part),
					Expected: "a number", Text: err.Error()})
				continue
			}
			if value == nil {
				value = s
				continue
			}
			if y, _ := parseNumber([]byte(value.value), m.builders[0].comma); x != y {
				valueDone = true
				m.add(Problem{Line: s.line, Column: m.layout.value + 1, Found: fmt.Sprintf("the value %s of part %s", s.value, quote(part)),
					Expected: value.value + ", as " + m.on(value.line), Text: "a part has one value"})
			}
		}
	}
}
