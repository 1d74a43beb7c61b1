package agreement

import "fmt"

// Pairing says which calls of two appraisers on a part are put side by side.
type Pairing int

const (
	// Matched pairs trial t of the one with trial t of the other, by their
	// numbers (Ratings.SetTrialNumbers).
	Matched Pairing = iota
	// All pairs every trial of the one with every trial of the other.
	All
)

// String returns matched or all; of another value, what it is.
func (p Pairing) String() string {
	switch p {
	case Matched:
		return "matched"
	case All:
		return "all"
	}
	return fmt.Sprintf("Pairing(%d)", int(p))
}

func (p Pairing) check() error {
	if p != Matched && p != All {
		return fmt.Errorf("agreement: %v, want Matched or All", p)
	}
	return nil
}

// Options says how a study is analysed. Its zero value is not useful; start
// from DefaultOptions.
type Options struct {
	Confidence  float64 // of every interval, between 0 and 1
	Resamples   int     // of whole parts, for the intervals of coefficients, up to MaxResamples; 0: linearised intervals instead
	Seed        uint64  // of the resampling: the same seed gives the same intervals
	Pairing     Pairing // of the trials of two appraisers
	Ordered     bool    // categories are grades in order: weighted kappas too
	Independent bool    // also the intervals that treat calls as independent
	// Names are those of the appraisers, for the texts of warnings: one for
	// each, or none. Without them an appraiser is told by number, the first as 1.
	Names []string
	// Progress, if not nil, is told from time to time how much of the
	// resampling is done.
	Progress func(done, of int)
}

// MaxResamples is the largest number of resamples that Options may ask for.
// More would change no limit that is worth printing.
const MaxResamples = 1_000_000

// DefaultOptions returns 95 % confidence, 2000 resamples, matched trials.
func DefaultOptions() Options {
	return Options{Confidence: 0.95, Resamples: 2000, Seed: 1}
}

func (o Options) check() error {
	if !(o.Confidence > 0 && o.Confidence < 1) {
		return fmt.Errorf("agreement: confidence %v is not between 0 and 1", o.Confidence)
	}
	if o.Resamples < 0 || o.Resamples > MaxResamples {
		return fmt.Errorf("agreement: %d resamples, want 0 to %d", o.Resamples, MaxResamples)
	}
	return o.Pairing.check()
}
