package signal

import (
	"errors"
	"fmt"
	"math"
	"sort"
)

// Graded holds the graded calls made on one part. A higher grade is a
// stronger sign that the part is bad.
type Graded struct {
	Bad    bool
	Grades []float64
}

// AreaUnderROC returns the area under the empirical ROC curve of graded calls:
// the chance that a call on a bad part carries a higher grade than a call on a
// good part, ties counting half (Mann–Whitney). The variance is by structural
// components with the part as cluster (Obuchowski, Biometrics 53 (1997)
// 567–578), which with one call a part is that of DeLong, DeLong &
// Clarke-Pearson (Biometrics 44 (1988) 837–845). The interval is normal on the
// logit scale. Where every bad part is graded above every good one (or below)
// the variance vanishes; the bound then is the exact one of a share that never
// failed in as many parts as the scarcer kind has.
//
// Parts without a grade are passed over. It returns an error if a grade is not
// finite or either kind of part is missing. Time is n log n in the grades.
func AreaUnderROC(parts []Graded, confidence float64) (Estimate, error) {
	if err := checkConfidence(confidence); err != nil {
		return Estimate{}, err
	}
	type call struct {
		grade float64
		part  int
		bad   bool
	}
	var calls []call
	var badParts, goodParts, badCalls, goodCalls int
	for i, p := range parts {
		if len(p.Grades) == 0 {
			continue
		}
		if p.Bad {
			badParts, badCalls = badParts+1, badCalls+len(p.Grades)
		} else {
			goodParts, goodCalls = goodParts+1, goodCalls+len(p.Grades)
		}
		for _, g := range p.Grades {
			if !finite(g) {
				return Estimate{}, fmt.Errorf("part %d: grade %v is not a number", i, g)
			}
			calls = append(calls, call{g, i, p.Bad})
		}
	}
	if badParts == 0 || goodParts == 0 {
		return Estimate{}, errors.New("the ROC curve needs graded calls on bad and on good parts")
	}
	sort.Slice(calls, func(i, j int) bool { return calls[i].grade < calls[j].grade })
	// component[part] sums, over the part's calls, the share of calls of the
	// other kind that it is ranked right against.
	component := make([]float64, len(parts))
	var badBelow, goodBelow int
	for i := 0; i < len(calls); {
		j, bad, good := i, 0, 0
		for ; j < len(calls) && calls[j].grade == calls[i].grade; j++ {
			if calls[j].bad {
				bad++
			} else {
				good++
			}
		}
		for ; i < j; i++ {
			if calls[i].bad {
				component[calls[i].part] += (float64(goodBelow) + float64(good)/2) / float64(goodCalls)
			} else {
				component[calls[i].part] += (float64(badCalls-badBelow-bad) + float64(bad)/2) / float64(badCalls)
			}
		}
		badBelow, goodBelow = badBelow+bad, goodBelow+good
	}
	var area float64
	for i, p := range parts {
		if p.Bad {
			area += component[i]
		}
	}
	area = math.Min(1, math.Max(0, area/float64(badCalls)))
	var sBad, sGood float64
	for i, p := range parts {
		d := component[i] - area*float64(len(p.Grades))
		if p.Bad {
			sBad += d * d
		} else {
			sGood += d * d
		}
	}
	if scarcer := min(badParts, goodParts); area == 0 || area == 1 || scarcer < 2 {
		return areaAtEdge(area, scarcer, confidence), nil
	}
	variance := sBad*float64(badParts)/float64(badParts-1)/sq(float64(badCalls)) +
		sGood*float64(goodParts)/float64(goodParts-1)/sq(float64(goodCalls))
	if variance <= 0 {
		return areaAtEdge(area, min(badParts, goodParts), confidence), nil
	}
	se := math.Sqrt(variance)
	half := twoSided(confidence) * se / (area * (1 - area))
	logit := math.Log(area / (1 - area))
	return Estimate{
		Value: area, Lower: logistic(logit - half), Upper: logistic(logit + half), HasLower: true, HasUpper: true,
		SE: se, Confidence: confidence, Method: "structural components with the part as cluster (Obuchowski 1997), logit scale",
	}, nil
}

// areaAtEdge is the interval of an area whose variance cannot be estimated.
func areaAtEdge(area float64, parts int, confidence float64) Estimate {
	e := Estimate{Value: area, Confidence: confidence}
	bound := math.Pow((1-confidence)/2, 1/float64(parts))
	switch area {
	case 1:
		e.Lower, e.Upper, e.HasLower, e.HasUpper = bound, 1, true, true
		e.Method = "exact bound of a share that never failed in the parts of the scarcer kind"
	case 0:
		e.Lower, e.Upper, e.HasLower, e.HasUpper = 0, 1-bound, true, true
		e.Method = "exact bound of a share that never failed in the parts of the scarcer kind"
	default:
		e.Why = "the variance needs two parts of each kind that do not all rank alike"
	}
	return e
}

func sq(x float64) float64 { return x * x }

func logistic(x float64) float64 {
	if x < 0 {
		e := math.Exp(x)
		return e / (1 + e)
	}
	return 1 / (1 + math.Exp(-x))
}
