package main

import (
	"cmp"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"samecall/cmd/samecall/internal/example"
	"samecall/cmd/samecall/internal/study"
	"samecall/cmd/samecall/internal/verdict"
)

// source is what a command is to read: the file named on the command line or
// a built-in example, and the settings that flags give.
type source struct {
	example, study string
	settings       study.Settings
	lower, upper   float64
	pairs          map[string]*levels
	members        [2]string // of the gauge, at the lower and the upper limit
	filed          filedNames
}

// addFlags gives a command a flag for every setting of the study file.
func (s *source) addFlags(cmd *cobra.Command) {
	f := cmd.Flags()
	f.SortFlags = false
	addText(f, &s.example, "example", "name", "read a built-in study instead of a file; samecall example lists them")
	addText(f, &s.study, "study", "file", "study file (TOML) with the settings, where the calls file is named on its own")
	addText(f, &s.settings.Calls, "calls", "file", "calls file, in place of the one that the study file names")
	addText(f, &s.settings.Sheet, "sheet", "name", "sheet of a workbook; the first if not given")
	addText(f, &s.settings.Title, "title", "text", "what the study is called in the answer")
	addText(f, &s.settings.Characteristic, "characteristic", "text", "what is inspected")
	addText(f, &s.settings.Gauge, "gauge", "text", "what it is inspected with")
	addText(f, &s.settings.Unit, "unit", "text", "unit of values and limits")
	addNumber(f, &s.lower, "lower", "12.000", "lower specification limit")
	addNumber(f, &s.upper, "upper", "12.018", "upper specification limit")
	accept, reject := study.UsualWords()
	addWords(f, &s.settings.Accept, "accept", "go,pass", "words that accept a part, such as go,pass; without --accept and --reject: "+accept)
	addWords(f, &s.settings.Reject, "reject", "nogo,fail", "words that reject a part, such as nogo,fail; without --accept and --reject: "+reject)
	addWords(f, &s.settings.Order, "order", "A,B,C", "grades from best to worst, where calls are grades, such as A,B,C")
	addWords(f, &s.settings.Categories, "categories", "fine,dent,burr", "kinds of calls, where they have no order, such as fine,dent,burr")
	addWords(f, &s.settings.Ignore, "ignore", "date,remark", "columns of the calls file to leave out, such as date,remark")
	addConfidence(f, &s.settings.Confidence, 0)
	s.pairs = make(map[string]*levels)
	for _, c := range []struct{ name, criterion, what string }{
		{"effectiveness", verdict.Effectiveness, "effectiveness"},
		{"miss", verdict.Miss, "the miss rate"},
		{"false-alarm", verdict.FalseAlarm, "the false-alarm rate"},
		{"kappa", verdict.Kappa, "kappa, against the reference and between appraisers"},
	} {
		s.pairs[c.name] = new(levels)
		addLevels(f, s.pairs[c.name], c.name, c.what, verdict.Default[c.criterion])
	}
	addText(f, &s.members[0], "gauge-sizes-lower", "sizes", "calibrated gauge member at the lower limit, such as size=9.997,uncertainty=0.0008,wear_limit=9.999")
	addText(f, &s.members[1], "gauge-sizes-upper", "sizes", "calibrated gauge member at the upper limit, likewise")
	_ = cmd.RegisterFlagCompletionFunc("example", completeExamples)
}

// read reads the study that the command line names.
func (s *source) read(cmd *cobra.Command, args []string, in streams) (*study.Study, error) {
	flags, err := s.flags(cmd)
	if err != nil {
		return nil, err
	}
	src := study.Source{Stdin: in.in, Study: s.study}
	switch {
	case s.example != "" && (len(args) > 0 || s.study != "" || flags.Calls != ""):
		return nil, errors.New("--example and a file are both given; leave one out")
	case s.example != "":
		files, err := example.FS(s.example)
		if err != nil {
			return nil, err
		}
		src.FS, src.Path = files, example.StudyFile
	case len(args) == 1:
		src.Path = args[0]
	case !s.named(args):
		return nil, fmt.Errorf("no study is named; give a calls file, a study file or --example NAME (%s --help)", cmd.CommandPath())
	}
	st, err := study.Read(src, flags)
	if err == nil && src.FS == nil && flags.Calls == "" && st.Settings.Calls != "" {
		calls := callsOf(cmp.Or(src.Study, src.Path), st.Settings.Calls)
		err = cmp.Or(keepRead(cmd, calls), keepFigures(cmd, []namedFile{calls}))
	}
	if errors.Is(err, fs.ErrNotExist) && src.FS == nil {
		err = fmt.Errorf("%w; the folder is %s", err, folder())
	}
	return st, err
}

// readFiled reads the study that the command line names for what is filed
// beside its files, and names them so.
func (s *source) readFiled(cmd *cobra.Command, args []string, in streams) (*study.Study, error) {
	st, err := s.read(cmd, args, in)
	if err != nil || s.example != "" {
		return st, err
	}
	s.filed = newFiledNames(readBy(cmd, args))
	for i, in := range st.Inputs {
		st.Inputs[i] = s.filed.input(in)
	}
	return st, nil
}

// callsOf is the calls file that a study file names.
func callsOf(studyFile, calls string) namedFile {
	if !filepath.IsAbs(calls) {
		calls = filepath.Join(filepath.Dir(studyFile), filepath.FromSlash(calls))
	}
	return namedFile{"the calls file of " + studyFile, calls}
}

// named reports whether a study is named.
func (s *source) named(args []string) bool {
	return len(args) > 0 || s.example != "" || s.study != "" || s.settings.Calls != ""
}

func folder() string {
	dir, err := os.Getwd()
	if err != nil {
		return "unknown"
	}
	return dir
}

// flags returns the settings that were given as flags.
func (s *source) flags(cmd *cobra.Command) (study.Settings, error) {
	out := s.settings
	if cmd.Flags().Changed("lower") {
		out.Lower = &s.lower
	}
	if cmd.Flags().Changed("upper") {
		out.Upper = &s.upper
	}
	for name, to := range map[string]**[2]float64{
		"effectiveness": &out.Criteria.Effectiveness,
		"miss":          &out.Criteria.Miss,
		"false-alarm":   &out.Criteria.FalseAlarm,
		"kappa":         &out.Criteria.Kappa,
	} {
		levels := s.pairs[name].numbers()
		switch {
		case !cmd.Flags().Changed(name):
		case len(levels) != 2:
			return out, fmt.Errorf("--%s has %s; expected two, the accept and the conditional level", name, countedNumbers(len(levels)))
		default:
			*to = &[2]float64{levels[0], levels[1]}
		}
	}
	for i, to := range []**study.GaugeMember{&out.GaugeSizes.Lower, &out.GaugeSizes.Upper} {
		flag := [...]string{"gauge-sizes-lower", "gauge-sizes-upper"}[i]
		if !cmd.Flags().Changed(flag) {
			continue
		}
		m, err := study.ParseGaugeMember(s.members[i], i == 1)
		if err != nil {
			return out, fmt.Errorf("--%s: %w", flag, err)
		}
		*to = m
	}
	return out, out.Validate()
}

// flagLevels names the criteria whose levels flags give.
func (s *source) flagLevels(cmd *cobra.Command) map[string]bool {
	out := make(map[string]bool)
	for name := range s.pairs {
		if cmd.Flags().Changed(name) {
			out[strings.ReplaceAll(name, "-", "_")] = true
		}
	}
	return out
}

func completeExamples(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
	var names []string
	for _, e := range example.Names() {
		names = append(names, e.Name+"\t"+e.About)
	}
	return names, cobra.ShellCompDirectiveNoFileComp
}

// oneFile is the arguments of a command that reads a study.
func oneFile(cmd *cobra.Command, args []string) error {
	if len(args) > 1 {
		return fmt.Errorf("%d files are named; expected one (a calls file, a study file, or - for standard input); studies of the same parts before and after a fix go into one table, each appraiser under two names, such as early before and early after", len(args))
	}
	return nil
}

// countedNumbers counts numbers in words.
func countedNumbers(n int) string {
	if n == 1 {
		return "1 number"
	}
	return fmt.Sprintf("%d numbers", n)
}

// flagError says in plain words what is wrong with a flag.
func flagError(cmd *cobra.Command, err error) error {
	var invalid *pflag.InvalidValueError
	if errors.As(err, &invalid) {
		flag := invalid.GetFlag()
		if errors.Is(err, errTwice) {
			return fmt.Errorf("--%s is given twice; give both levels at once, with a comma between them", flag.Name)
		}
		expected := "true or false" // of a flag that is on or off
		if v, ok := flag.Value.(value); ok {
			expected = v.expected
		}
		return fmt.Errorf("--%s is %q; expected %s", flag.Name, invalid.GetValue(), expected)
	}
	return fmt.Errorf("%w; %s --help lists what there is", err, cmd.CommandPath())
}
