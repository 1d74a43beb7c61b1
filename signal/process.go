package signal

import (
	"errors"
	"fmt"
)

// Process is where the values of the parts come from: a normal distribution,
// or the values themselves.
type Process struct {
	Mean, SD float64
	Values   []float64 // if not empty, the process is these values, each as likely
}

// NormalProcess returns a normal process.
func NormalProcess(mean, sd float64) (Process, error) {
	if !finite(mean, sd) || !(sd > 0) {
		return Process{}, fmt.Errorf("process mean %v, standard deviation %v: want finite numbers, the standard deviation above 0", mean, sd)
	}
	return Process{Mean: mean, SD: sd}, nil
}

// CapableProcess returns the normal process that has capability Cp and Cpk
// between two limits, its mean off centre towards the side named. The
// standard deviation is (upper−lower)/(6 Cp) and the mean 3 Cpk standard
// deviations inside that side's limit.
func CapableProcess(limits Limits, cp, cpk float64, towards Side) (Process, error) {
	tolerance, ok := limits.Tolerance()
	if !ok {
		return Process{}, errors.New("capability Cp needs both specification limits; with one, give mean and standard deviation")
	}
	if err := limits.check(); err != nil {
		return Process{}, err
	}
	if !finite(cp, cpk) || !(cp > 0) {
		return Process{}, fmt.Errorf("capability Cp %v and Cpk %v: want finite numbers, Cp above 0", cp, cpk)
	}
	if cpk > cp {
		return Process{}, fmt.Errorf("capability Cpk %v is above Cp %v, which no process can have", cpk, cp)
	}
	sd := tolerance / (6 * cp)
	mean := limits.Lower + 3*cpk*sd
	if towards == Upper {
		mean = limits.Upper - 3*cpk*sd
	}
	return NormalProcess(mean, sd)
}

// SampledProcess returns the process that is a sample of values: no
// distribution is laid through them.
func SampledProcess(values []float64) (Process, error) {
	if len(values) == 0 {
		return Process{}, errors.New("no values of the process")
	}
	for i, v := range values {
		if !finite(v) {
			return Process{}, fmt.Errorf("process value %d, %v, is not a number", i+1, v)
		}
	}
	return Process{Values: append([]float64(nil), values...)}, nil
}
