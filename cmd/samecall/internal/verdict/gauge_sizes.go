package verdict

import (
	"fmt"

	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// explain compares the calibrated size of the gauge's member with the offset
// at its limit; nil where no size is known.
func (f *finder) explain(l *signal.LimitFit) *signal.Explanation {
	m := f.member(l.Side)
	if m == nil {
		return nil
	}
	e, err := signal.Explain(l, signal.Member{
		Side: l.Side, Size: m.Size, Uncertainty: m.Uncertainty,
		WearLimit: m.WearLimit, HasWear: m.HasWear, WearsUp: m.WearsLarger,
	})
	if err != nil {
		return nil
	}
	return e
}

// checkGauge says what to do about a gauge that cuts beside its limit, by what
// is known of its member there.
func (f *finder) checkGauge(l *signal.LimitFit, otherwise string) string {
	again := fmt.Sprintf("repeat the parts near the %s limit.", l.Side)
	e := f.explain(l)
	switch {
	case e == nil:
		return otherwise
	case e.Finding == signal.Unexplained && e.Worn:
		return fmt.Sprintf("Take the gauge member at the %s limit out of use: it is worn beyond its limit. Its size does not explain the shift: check the setting and the use of the gauge and the values of the parts too. Then %s", l.Side, again)
	case e.Finding == signal.Unexplained:
		return fmt.Sprintf("Check the setting and the use of the gauge at the %s limit and the values of the parts: the calibrated size does not explain the shift. Then %s", l.Side, again)
	case e.Worn:
		return fmt.Sprintf("Take the gauge member at the %s limit out of use: it is worn beyond its limit. With a good one, %s", l.Side, again)
	case e.Finding == signal.PartlyExplained:
		return fmt.Sprintf("Correct or replace the gauge member at the %s limit, and check setting and use: its size explains the shift in part. Then %s", l.Side, again)
	}
	return fmt.Sprintf("Correct or replace the gauge member at the %s limit: its size explains the shift. Then %s", l.Side, again)
}

// calibrated says, with a space before it, whether the calibrated size of the
// gauge's member explains the offset at its limit; nothing where no size is
// known.
func (f *finder) calibrated(l *signal.LimitFit) string {
	e := f.explain(l)
	if e == nil {
		return ""
	}
	s := f.Scale()
	does := map[signal.Finding]string{
		signal.Explained:       "explains it",
		signal.PartlyExplained: "explains it in part",
		signal.Unexplained:     "does not explain it",
	}[e.Finding]
	text := fmt.Sprintf(" The member at this limit, calibrated at %s, %s", s.WithUnit(s.Value(e.Member.Size)), does)
	switch {
	case e.Worn:
		text += "; it is worn beyond its limit"
	case e.PerhapsWorn:
		text += "; it may be worn beyond its limit"
	}
	return text + "."
}

func (f *finder) member(at signal.Side) *study.GaugeMember {
	if at == signal.Lower {
		return f.Study.Settings.GaugeSizes.Lower
	}
	return f.Study.Settings.GaugeSizes.Upper
}
