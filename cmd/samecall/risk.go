package main

import (
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"samecall/cmd/samecall/internal/judge"
	"samecall/cmd/samecall/internal/report"
	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// riskFlags are the flags of risk that are not those of a study.
type riskFlags struct {
	mean, sd, cp, cpk    float64
	towards              string
	values, column       string
	cutLower, cutUpper   float64
	sigma                numberList
	guard                numberList
	target               float64
	shown                bool
	costEscape, costFail float64
	appraiser            string
}

func newRisk(s streams) *cobra.Command {
	var src source
	var shape curve
	var ask riskFlags
	var jsonFile string
	cmd := &cobra.Command{
		Use:   "risk [FILE]",
		Short: "How many bad parts escape and good ones are thrown out, in ppm",
		Long: `risk tells what an inspection does to a process: the share shipped bad
(escapes) and the share of good parts rejected, in ppm, per limit and with
intervals; what a guard band (each cut moved inwards) changes; which guard band
holds the escapes under a target, and which costs least.

How the inspection cuts comes from a study with values and limits (FILE, as in
judge) or, without a study, from --cut-lower, --cut-upper and --sigma with
--lower and --upper. The process comes from --mean and --sd, from --cp and
--cpk, or from a file of measured values: your assumption, on which everything
rests. docs/zone-and-risk.md tells the methods.

Exit status: 0 done, 2 the command line is wrong or a file cannot be opened or
written, 3 the data is wrong or gives no curve.`,
		Example: `  samecall risk --example bore --mean 10.018 --sd 0.006
  samecall risk study.toml --cp 1.33 --cpk 1.0 --towards lower
  samecall risk study.toml --process-values measured.csv --escape-target 10
  samecall risk study.toml --mean 12.009 --sd 0.003 --cost-escape 500 --cost-reject 4
  samecall risk --lower 9.95 --upper 10.05 --cut-lower 9.95 --cut-upper 10.05 \
    --sigma 0.005 --mean 10 --sd 0.02`,
		Args: oneFile,
		RunE: func(cmd *cobra.Command, args []string) error {
			opt, err := shape.options(0)
			if err != nil {
				return err
			}
			want, err := ask.wanted(cmd)
			if err != nil {
				return err
			}
			var r *judge.Risks
			var record *report.Record
			if given(cmd, "cut-lower", "cut-upper", "sigma") {
				r, err = ask.known(cmd, &src, s, args, opt, want)
			} else {
				r, record, err = ask.fitted(cmd, &src, s, args, opt, want)
			}
			if err != nil {
				return err
			}
			return jsonOrText(s, jsonFile,
				func(w io.Writer) error { return report.RiskJSON(w, r, record) },
				func(w io.Writer) error { return report.Risk(w, r, record, terminal(s.out)) })
		},
	}
	ask.addFlags(cmd)
	addJSON(cmd, &jsonFile)
	shape.addFlags(cmd)
	src.addFlags(cmd)
	return cmd
}

func (a *riskFlags) addFlags(cmd *cobra.Command) {
	f := cmd.Flags()
	f.SortFlags = false
	addNumber(f, &a.mean, "mean", "12.009", "mean of the process, assumed normal")
	addNumber(f, &a.sd, "sd", "0.003", "standard deviation of the process")
	addNumber(f, &a.cp, "cp", "1.33", "capability Cp of the process, in place of mean and standard deviation")
	addNumber(f, &a.cpk, "cpk", "1.0", "capability Cpk of the process")
	addChoice(cmd, &a.towards, "towards", "", "the limit that the process lies nearer to, where Cpk is less than Cp", "lower", "upper")
	addText(f, &a.values, "process-values", "file", "file with measured values of the process, CSV or .xlsx; no distribution is laid through them")
	addText(f, &a.column, "process-column", "name", "its column; without it the only one, or the one named value")
	addNumbers(f, &a.guard, "guard", "numbers with commas between them, such as 0,0.002,0.004", "guard bands of the table, such as 0,0.002,0.004; without it multiples of σ")
	addNumber(f, &a.target, "escape-target", "10", "find the guard band that holds the escapes under so many ppm")
	f.BoolVar(&a.shown, "shown", false, "with --escape-target: hold the upper bound of the interval under it, not the estimate")
	addNumber(f, &a.costEscape, "cost-escape", "500", "find the cheapest guard band: cost of an escape")
	addNumber(f, &a.costFail, "cost-reject", "4", "and of a good part rejected, in the same money")
	addText(f, &a.appraiser, "appraiser", "name", "the curve of this appraiser in place of all together")
	addNumber(f, &a.cutLower, "cut-lower", "9.95", "without a study: the value accepted half of the time at the lower limit")
	addNumber(f, &a.cutUpper, "cut-upper", "10.05", "and at the upper limit")
	addNumbers(f, &a.sigma, "sigma", "a number such as 0.005, or two with a comma between them", "without a study: σ of the inspection, or those at the lower and the upper limit")
}

// given reports whether any of the flags was given.
func given(cmd *cobra.Command, names ...string) bool {
	for _, n := range names {
		if cmd.Flags().Changed(n) {
			return true
		}
	}
	return false
}

// together checks flags of which one makes no sense without the others.
func together(cmd *cobra.Command, names ...string) (bool, error) {
	any := given(cmd, names...)
	for _, n := range names {
		if any && !given(cmd, n) {
			return false, fmt.Errorf("--%s is missing; --%s and --%s go together", n, names[0], names[1])
		}
	}
	return any, nil
}

// wanted checks what is asked for, before anything is read.
func (a *riskFlags) wanted(cmd *cobra.Command) (judge.RiskAsk, error) {
	var want judge.RiskAsk
	ways := 0
	for _, pair := range [][]string{{"mean", "sd"}, {"cp", "cpk"}} {
		ok, err := together(cmd, pair...)
		if err != nil {
			return want, err
		}
		if ok {
			ways++
		}
	}
	if a.values != "" {
		ways++
	}
	switch {
	case ways == 0:
		return want, errors.New("no process is given; give --mean and --sd, --cp and --cpk, or --process-values FILE")
	case ways > 1:
		return want, errors.New("the process is given twice; give one of --mean and --sd, --cp and --cpk, or --process-values FILE")
	case a.towards != "" && !given(cmd, "cp"):
		return want, errors.New("--towards goes with --cp and --cpk")
	case a.towards != "" && a.towards != "lower" && a.towards != "upper":
		return want, fmt.Errorf("--towards is %q; expected lower or upper", a.towards)
	case given(cmd, "cp") && a.cpk > a.cp:
		return want, fmt.Errorf("--cpk is %v and --cp %v; Cpk cannot exceed Cp, and equals it where the process is centred", a.cpk, a.cp)
	case given(cmd, "cp") && a.cpk != a.cp && a.towards == "":
		return want, errors.New("--cpk differs from --cp: the process is off centre; say with --towards lower or --towards upper to which side")
	case a.column != "" && a.values == "":
		return want, errors.New("--process-column goes with --process-values")
	case a.shown && !given(cmd, "escape-target"):
		return want, errors.New("--shown goes with --escape-target")
	}
	if want.HasTarget = given(cmd, "escape-target"); want.HasTarget {
		if !(a.target > 0 && a.target < 1e6) {
			return want, fmt.Errorf("--escape-target is %v; expected ppm above 0 and below 1000000", a.target)
		}
		want.Target, want.Shown = a.target/1e6, a.shown
	}
	var err error
	if want.HasCosts, err = together(cmd, "cost-escape", "cost-reject"); err != nil {
		return want, err
	}
	want.CostEscape, want.CostReject = a.costEscape, a.costFail
	if want.HasCosts && !(a.costEscape >= 0 && a.costFail >= 0 && a.costEscape+a.costFail > 0) {
		return want, fmt.Errorf("--cost-escape is %v and --cost-reject %v; expected costs of 0 or more, one of them above 0", a.costEscape, a.costFail)
	}
	if given(cmd, "guard") {
		want.Guards = append([]float64{}, a.guard...)
	}
	return want, nil
}

// process returns the process between the limits, and the file of its values.
func (a *riskFlags) process(cmd *cobra.Command, limits signal.Limits, in streams, sheet string) (signal.Process, study.Input, error) {
	none := study.Input{}
	switch {
	case a.values != "":
		v, err := study.ReadValues(study.Source{Path: a.values, Stdin: in.in}, sheet, a.column)
		if err != nil {
			return signal.Process{}, none, err
		}
		p, err := signal.SampledProcess(v.Values)
		return p, v.Input, err
	case given(cmd, "cp"):
		side := signal.Lower
		if a.towards == "upper" {
			side = signal.Upper
		}
		p, err := signal.CapableProcess(limits, a.cp, a.cpk, side)
		return p, none, err
	}
	p, err := signal.NormalProcess(a.mean, a.sd)
	return p, none, err
}

// fitted assesses the curve of a study.
func (a *riskFlags) fitted(cmd *cobra.Command, src *source, in streams, args []string, opt signal.Options, want judge.RiskAsk) (*judge.Risks, *report.Record, error) {
	if !src.named(args) {
		return nil, nil, errors.New("no study is named; give a calls file, a study file or --example NAME, or --cut-lower, --cut-upper and --sigma without a study")
	}
	if a.values == "-" && (slices.Contains(args, "-") || src.study == "-" || src.settings.Calls == "-") {
		return nil, nil, errors.New("the study and --process-values both come from standard input; give one of them a file")
	}
	at := newProgress(in.err)
	defer at.end()
	at.at("reading the calls")
	st, err := src.readFiled(cmd, args, in)
	if err != nil {
		return nil, nil, err
	}
	at.at("fitting the acceptance curve and its risks")
	if err := needValues(st); err != nil {
		return nil, nil, statusError{exitWrongData, err}
	}
	if a.appraiser != "" && !slices.Contains(st.Appraisers, a.appraiser) {
		return nil, nil, fmt.Errorf("--appraiser: no appraiser is named %q; there are %s", a.appraiser, strings.Join(st.Appraisers, ", "))
	}
	opt.Confidence = st.Settings.Confidence
	c, err := judge.PooledCurve(st, opt, a.appraiser)
	if err != nil {
		return nil, nil, statusError{exitWrongData, err}
	}
	var file study.Input
	if want.Process, file, err = a.process(cmd, c.Limits, in, ""); err != nil {
		return nil, nil, err
	}
	r, err := judge.NewRisks(c, want, st.Settings.Unit)
	if err != nil {
		return nil, nil, statusError{exitWrongData, err}
	}
	r.Appraiser, r.ValuesFile = a.appraiser, newFiledNames(readBy(cmd, args)).input(file)
	return r, report.StudyRecord(st), nil
}

// known assesses a gauge that the flags describe.
func (a *riskFlags) known(cmd *cobra.Command, src *source, in streams, args []string, opt signal.Options, want judge.RiskAsk) (*judge.Risks, error) {
	settings, err := src.flags(cmd)
	if err != nil {
		return nil, err
	}
	if src.named(args) {
		return nil, errors.New("a study and --cut-lower, --cut-upper or --sigma are both given; the cuts come from one of them")
	}
	switch {
	case a.appraiser != "" || opt.Lapse || opt.TwoSigmas:
		return nil, errors.New("--appraiser, --lapse and --two-sigmas go with a study")
	case want.Shown:
		return nil, errors.New("--shown goes with a study: cuts and σ that are given have no interval, so escapes have no upper bound")
	}
	g := signal.Gauge{Link: opt.Link, HasLower: given(cmd, "cut-lower"), HasUpper: given(cmd, "cut-upper"), LowerCut: a.cutLower, UpperCut: a.cutUpper}
	limits := signal.Limits{}
	for _, l := range []struct {
		name    string
		cut     bool
		setting *float64
		to      *float64
		has     *bool
	}{{"lower", g.HasLower, settings.Lower, &limits.Lower, &limits.HasLower}, {"upper", g.HasUpper, settings.Upper, &limits.Upper, &limits.HasUpper}} {
		if l.cut != (l.setting != nil) {
			return nil, fmt.Errorf("--cut-%s and --%s go together: where the limit is, and where the inspection cuts", l.name, l.name)
		}
		if l.cut {
			*l.to, *l.has = *l.setting, true
		}
	}
	switch {
	case !g.HasLower && !g.HasUpper:
		return nil, errors.New("--sigma is given and no cut; give --cut-lower with --lower, --cut-upper with --upper, or all four")
	case len(a.sigma) == 0:
		return nil, errors.New("--sigma is missing: the σ of the inspection at its cuts")
	case len(a.sigma) > 2 || len(a.sigma) == 2 && !(g.HasLower && g.HasUpper):
		return nil, fmt.Errorf("--sigma has %d numbers; expected one, or two where there are two cuts", len(a.sigma))
	}
	if g.HasLower && g.HasUpper && g.LowerCut >= g.UpperCut {
		return nil, fmt.Errorf("--cut-lower is %v and --cut-upper %v; the lower cut must lie below the upper one", g.LowerCut, g.UpperCut)
	}
	g.LowerSigma, g.UpperSigma = a.sigma[0], a.sigma[len(a.sigma)-1]
	var file study.Input
	if want.Process, file, err = a.process(cmd, limits, in, settings.Sheet); err != nil {
		return nil, err
	}
	r, err := judge.NewKnownRisks(signal.Known{Gauge: g, Limits: limits}, want, settings.Unit)
	if err != nil {
		return nil, err
	}
	r.ValuesFile = newFiledNames(readBy(cmd, args)).input(file)
	return r, nil
}
