package study

// Summary is what a study holds and what it can show, as plain facts.
type Summary struct {
	Parts int
	// Good, Bad and Unreferenced parts; Good and Bad are 0 where categories
	// are not split into accept and reject.
	Good, Bad, Unreferenced int
	ByCategory              []int // parts by the category of their reference; nil without reference

	Appraisers []AppraiserSummary
	Calls      int  // calls made
	Missing    int  // calls that a complete study would have beside them
	Balanced   bool // every appraiser called every part in each of the same number of trials

	Values  *ValueSummary // nil without values
	CanShow []Showing     // what the study can and cannot show
}

// AppraiserSummary counts the calls of one appraiser.
type AppraiserSummary struct {
	Appraiser string
	Trials    []int // numbers, ascending
	Calls     int
	Missing   int // parts × trials less the calls
	Parts     int // parts with one call or more
}

// ValueSummary is the range of the reference values, and how many parts lie
// near each limit.
type ValueSummary struct {
	Count    int
	Min, Max float64
	Lower    *LimitSummary // nil without such a limit
	Upper    *LimitSummary
}

// LimitSummary counts the parts near one limit: no further from it than
// Width. NearGood lie on the good side of it or on it, NearBad beyond.
type LimitSummary struct {
	Limit             float64
	Width             float64
	OfTolerance       bool // Width is a share of the tolerance, else of the spread of the values
	NearGood, NearBad int
	Inside, Outside   int // parts on the good side of this limit or on it, and beyond
}

// Showing is one thing that a study can or cannot show, with the numbers
// that its sentence is made from.
type Showing struct {
	Code  string // such as miss_rate, no_bad_parts, one_trial
	Text  string
	Parts int     // number of parts that it rests on, where it does
	Limit float64 // upper limit of a rate, where there is one
}

// Summary counts what the study holds.
func (s *Study) Summary() Summary { return Summary{} }
