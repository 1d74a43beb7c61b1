package report

import (
	"fmt"
	"io"
	"math"
	"path/filepath"
	"slices"
	"strings"

	"github.com/jedib0t/go-pretty/v6/text"

	"samecall/agreement"
	"samecall/cmd/samecall/internal/format"
	"samecall/cmd/samecall/internal/study"
)

// Terminal says what a text is written to.
type Terminal struct {
	Width  int  // columns
	Colour bool // bold heads; never the only sign of anything
}

func (t Terminal) bold(s string) string {
	if !t.Colour {
		return s
	}
	return "\x1b[1m" + s + "\x1b[0m"
}

// Text writes the answer: one screen, or with full everything there is.
func Text(w io.Writer, r *Record, term Terminal, full bool) error {
	p := &printer{w: w, term: term}
	p.head(r)
	p.verdict(r)
	if !full {
		p.answer(r)
		p.next(r)
		p.warnings(r)
		return p.err
	}
	p.next(r)
	p.warnings(r)
	p.table(studyTable(r))
	p.command(r)
	for _, s := range fullSections(r) {
		p.heading(s.Title)
		p.notes(s.Notes, "")
		for _, t := range s.Tables {
			p.table(t)
		}
	}
	return p.err
}

// heading writes the heading of a group of tables, between double lines that no
// table has.
func (p *printer) heading(s string) {
	const widest = 100
	s = "══ " + s + " "
	p.line("")
	p.line(p.term.bold(s + strings.Repeat("═", max(0, min(p.term.Width, widest)-wide(s)))))
}

// verdict writes the answer to whether the inspection is fit for use.
func (p *printer) verdict(r *Record) {
	v := r.Verdict
	p.line("")
	p.line(p.term.bold(headline(v)))
	for _, why := range verdictLines(r) {
		p.wrap("  "+why, "  ")
	}
	for _, c := range v.Causes {
		p.wrap("Cause: "+c.Text, "  ")
	}
}

// reasonLines are the reasons, each with how far the data carry it.
func reasonLines(r *Record) []string {
	var out []string
	for i, why := range r.Verdict.Reasons {
		if i < len(r.Verdict.Carry) {
			why += " " + r.Verdict.Carry[i]
		}
		out = append(out, why)
	}
	return out
}

// next writes what to do now.
func (p *printer) next(r *Record) {
	p.line("")
	p.line(p.term.bold("What to do next"))
	for i, n := range r.Verdict.Next {
		p.wrap(fmt.Sprintf("%d. %s", i+1, n), "   ")
	}
	p.wrap(strings.Join(r.Verdict.Cautions, " "), "")
}

// printer keeps the first error of writing.
type printer struct {
	w    io.Writer
	term Terminal
	err  error
	said map[string]bool // reasons below the tables of one screen, each told once; nil: each below its table
}

func (p *printer) line(s string) {
	if p.err == nil {
		_, p.err = io.WriteString(p.w, strings.TrimRight(s, " ")+"\n")
	}
}

// What wrapping must not see: private characters in the place of spaces that
// hold together what stands beside them.
var (
	join   = strings.NewReplacer(" %", "\ue000%", " σ", "\ue000σ", " − ", "\ue000−\ue000", "\u00a0", "\ue001", "\u202f", "\ue002")
	unjoin = strings.NewReplacer("\ue000", " ", "\ue001", "\u00a0", "\ue002", "\u202f")
)

// joined is a text with no space between a number and its sign, about a minus
// or where there is a space without a break: there no line ends.
func joined(s string) string { return join.Replace(s) }

// wrapped breaks a text into lines.
func wrapped(s string, width int) string {
	lines := strings.Split(text.WrapSoft(joined(s), width), "\n")
	for i, l := range lines {
		lines[i] = strings.TrimRight(l, " ")
	}
	return unjoin.Replace(strings.Join(lines, "\n"))
}

// Lines breaks a text into lines for a terminal of so many columns, each
// behind indent.
func Lines(s string, width int, indent string) string {
	return indent + strings.ReplaceAll(wrapped(s, max(20, width-wide(indent))), "\n", "\n"+indent)
}

// wrap writes a paragraph, its lines after the first behind indent.
func (p *printer) wrap(s, indent string) {
	width := max(20, p.term.Width-len(indent))
	lead := s[:len(s)-len(strings.TrimLeft(s, " "))] // which wrapping would eat
	for i, line := range strings.Split(wrapped(strings.TrimLeft(format.Plain(s), " "), width), "\n") {
		if i == 0 {
			line = lead + line
		}
		if i > 0 {
			line = indent + line
		}
		p.line(line)
	}
}

func (p *printer) table(t Table) {
	p.line("")
	if t.Title != "" {
		p.title(t.Title)
	}
	for _, l := range strings.Split(t.render(p.term.Width), "\n") {
		p.line(l)
	}
	if t.Note != "" {
		p.wrap(t.Note, "")
	}
	for _, why := range t.whys() {
		if !p.said[why] {
			p.wrap(why, "")
		}
		if p.said != nil {
			p.said[why] = true
		}
	}
}

// command writes the line that computes the record again as it is to be typed:
// on one line, however wide the terminal is.
func (p *printer) command(r *Record) {
	p.line("")
	p.wrap(aboveCommand(r), "")
	p.line(format.Plain(r.Command))
}

func (p *printer) head(r *Record) {
	p.title(title(r))
	p.wrap(facts(r), "")
}

// title writes a head in bold.
func (p *printer) title(s string) {
	for l := range strings.SplitSeq(wrapped(format.Plain(s), p.term.Width), "\n") {
		p.line(p.term.bold(l))
	}
}

// title is what the study is called: its title, or the file of its calls.
func title(r *Record) string { return studyTitle(r.Study) }

func studyTitle(s *study.Study) string {
	if t := s.Settings.Title; t != "" || len(s.Inputs) == 0 {
		return t
	}
	return fileName(s.Inputs[len(s.Inputs)-1])
}

// fileName is the name of a file without its folders, which say nothing of a
// study; a device is nothing without its folder.
func fileName(in study.Input) string {
	if strings.HasPrefix(in.File, "/dev/") {
		return in.File
	}
	return filepath.Base(in.File)
}

// facts says in one paragraph what was studied.
func facts(r *Record) string {
	s := r.Study
	var out []string
	for _, t := range []string{s.Settings.Characteristic, s.Settings.Gauge} {
		if t != "" {
			out = append(out, t)
		}
	}
	if l := limitsText(r); l != "" {
		out = append(out, l)
	}
	d := newStudy(r)
	parts := format.Counted(d.Parts, "part")
	if d.BadParts != nil {
		parts += fmt.Sprintf(" (%s bad, %s good)", format.Count(*d.BadParts), format.Count(*d.GoodParts))
	}
	out = append(out, parts, format.Counted(len(s.Appraisers), "appraiser")+" × "+trials(r))
	calls := format.Counted(d.Calls, "call")
	if d.Missing > 0 {
		calls += fmt.Sprintf(", %s missing", format.Count(d.Missing))
	}
	reference := "reference " + d.Reference
	if d.Reference == study.None.String() {
		reference = "no reference"
	}
	out = append(out, calls, reference)
	return strings.Join(out, " · ")
}

// trials says how many trials there were: from fewest to most, where
// appraisers had different numbers.
func trials(r *Record) string {
	least, most := math.MaxInt, 0
	for a := range r.Study.Appraisers {
		n := r.Study.Ratings.Trials(a)
		least, most = min(least, n), max(most, n)
	}
	if least >= most {
		return format.Counted(most, "trial")
	}
	return fmt.Sprintf("%d to %d trials", least, most)
}

func limitsText(r *Record) string {
	lower, upper, unit := r.Study.Settings.Lower, r.Study.Settings.Upper, r.Study.Settings.Unit
	if unit != "" {
		unit = " " + unit
	}
	switch {
	case lower != nil && upper != nil:
		limits := format.Alike(*lower, *upper)
		return limits[0] + " to " + limits[1] + unit
	case lower != nil:
		return "at least " + format.Number(*lower) + unit
	case upper != nil:
		return "at most " + format.Number(*upper) + unit
	}
	return ""
}

// manyAppraisers is how many rows the answer shows; of more, the worst.
const manyAppraisers = 12

// answer writes the one screen.
func (p *printer) answer(r *Record) {
	p.said = make(map[string]bool)
	main := withinTable(r)
	if r.Agreement.All != nil {
		main = againstTable(r, false)
	}
	p.table(worst(r, main))
	p.square(r)
	p.between(r)
	p.zone(r)
}

// zone writes the grey zone, where the study has one.
func (p *printer) zone(r *Record) {
	if r.Zone == nil {
		return
	}
	if t := zoneTable(r); len(t.Rows) > 0 {
		p.table(t)
	} else {
		p.line("")
	}
	for _, n := range zoneNotes(r, onScreen) {
		p.wrap(n, "")
	}
}

// worst cuts a table with a row for each appraiser down to the worst ones.
func worst(r *Record, t Table) Table {
	n := len(r.Study.Appraisers)
	if n <= manyAppraisers {
		return t
	}
	order := worstFirst(r)
	rows := make([][]Cell, 0, manyAppraisers+1)
	for _, a := range order[:manyAppraisers] {
		rows = append(rows, t.Rows[a])
	}
	t.Rows = append(rows, t.Rows[n:]...)
	t.Note = fmt.Sprintf("The %d worst of %d appraisers; --full lists all. %s", manyAppraisers, n, t.Note)
	return t
}

// worstFirst orders appraisers by effectiveness or, without a reference, by
// how often they repeat themselves.
func worstFirst(r *Record) []int {
	share := func(a int) agreement.Share {
		if r.Agreement.All != nil {
			return r.Agreement.Against[a].Effectiveness
		}
		return r.Agreement.Within[a].Share
	}
	order := make([]int, len(r.Study.Appraisers))
	for a := range order {
		order[a] = a
	}
	slices.SortStableFunc(order, func(a, b int) int {
		switch x, y := share(a).Value, share(b).Value; {
		case x < y:
			return -1
		case x > y:
			return 1
		}
		return 0
	})
	return order
}

// square writes the agreement square, with kappas where they fit, and leaves
// it to --full where not even the shares do.
func (p *printer) square(r *Record) {
	if len(r.Study.Appraisers) < 2 {
		return
	}
	s := newSquare(r)
	for _, kappas := range []bool{true, false} {
		t := s.table(kappas)
		if !t.fits(p.term.Width) {
			continue
		}
		p.table(t)
		return
	}
	p.line("")
	p.wrap(fmt.Sprintf("The agreement square of %d appraisers is too wide for this screen; --full lists each two.", len(s.names)), "")
}

// between writes one sentence on all appraisers together.
func (p *printer) between(r *Record) {
	b := r.Agreement.Between
	if len(r.Study.Appraisers) < 2 { // else it goes with the square
		p.line("")
	}
	if b.Share.Absent != nil {
		p.wrap("Between appraisers: "+b.Share.Absent.Error()+".", "")
		return
	}
	s := fmt.Sprintf("All calls of all appraisers are alike on %s of %s parts: %s.", format.Count(b.Share.Count), format.Count(b.Share.Of), format.Share(b.Share))
	if k := b.DifferentAppraisers; k.Absent != nil {
		s += " Kappa: " + k.Absent.Error() + "."
	} else {
		s += fmt.Sprintf(" Kappa between appraisers %s; Fleiss' kappa of all calls %s.", format.Kappa(k), format.Kappa(b.Fleiss))
		if k.Unbounded != nil {
			s += " No interval: " + k.Unbounded.Error() + "."
		}
		if note := belowNote(k, b.Fleiss); note != "" {
			s += " " + note
		}
	}
	p.wrap(s, "")
	for _, l := range leanLines(r) {
		p.wrap(l, "")
	}
}

func (p *printer) notes(list []string, indent string) {
	for _, n := range list {
		p.wrap(n, indent)
	}
}

func (p *printer) warnings(r *Record) {
	for _, n := range r.Warnings {
		p.line("")
		p.wrap("Note: "+n.Text, "      ")
	}
}
