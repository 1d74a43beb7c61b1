package verdict

import (
	"fmt"

	"samecall/cmd/samecall/internal/study"
	"samecall/signal"
)

// calibrated says, with a space before it, whether the calibrated size of the
// gauge's member explains the offset at its limit; nothing where no size is
// known.
func (f *finder) calibrated(l *signal.LimitFit) string {
	m := f.member(l.Side)
	if m == nil {
		return ""
	}
	e, err := signal.Explain(l, signal.Member{
		Side: l.Side, Size: m.Size, Uncertainty: m.Uncertainty,
		WearLimit: m.WearLimit, HasWear: m.HasWear, WearsUp: m.WearsLarger,
	})
	if err != nil {
		return ""
	}
	s := f.Scale()
	does := map[signal.Finding]string{
		signal.Explained:       "explains it",
		signal.PartlyExplained: "explains it in part",
		signal.Unexplained:     "does not explain it",
	}[e.Finding]
	text := fmt.Sprintf(" The member at this limit, calibrated at %s, %s", s.WithUnit(s.Value(m.Size)), does)
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
