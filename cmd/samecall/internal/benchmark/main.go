// Command benchmark measures samecall as whole processes and prints a row for
// each piece of work. Run it from the top of the module:
//
//	go run ./cmd/samecall/internal/benchmark
//
// It builds the program, writes its data into a temporary folder (about
// 660 MB, removed at the end) and runs everything several times in turn, so
// that a busy machine slows all rows alike. The best time is printed, and the
// median in brackets.
package main

import (
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"time"
)

// work is one process to measure.
type work struct {
	name string
	args []string
}

func main() {
	if len(os.Args) > 2 && os.Args[1] == one {
		os.Exit(measureOne(os.Args[2:]))
	}
	rounds := flag.Int("rounds", 5, "how often each process is run")
	flag.Parse()
	if err := measure(*rounds); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

func measure(rounds int) error {
	dir, err := os.MkdirTemp("", "samecall-benchmark-")
	if err != nil {
		return err
	}
	defer func() { _ = os.RemoveAll(dir) }()
	program := filepath.Join(dir, "samecall")
	if out, err := exec.Command("go", "build", "-o", program, "./cmd/samecall").CombinedOutput(); err != nil {
		return fmt.Errorf("go build: %w\n%s", err, out)
	}
	const study = "testdata/reference/msa-manual-50x3x3.csv"
	small := []string{program, "judge", study, "--lower", "0.45", "--upper", "0.545", "--json", os.DevNull}
	works := []work{
		{"start and exit (--version)", []string{program, "--version"}},
		{"50 parts × 3 appraisers × 3 trials, 2000 resamples", small},
		{"the same, 10 000 resamples", append(slices.Clone(small), "--resamples", "10000")},
	}
	for _, order := range orders {
		name := filepath.Join(dir, order.name+".csv")
		size, err := writeCalls(name, order)
		if err != nil {
			return err
		}
		works = append(works,
			work{fmt.Sprintf("10 million calls, %d MB, %s", size/1_000_000, order.name), []string{program, "judge", name, "--resamples", "0", "--json", os.DevNull}})
	}
	works = append(works, work{"for comparison: awk counts the lines", []string{"awk", "END{print NR}", filepath.Join(dir, orders[0].name+".csv")}})

	times := make([][]time.Duration, len(works))
	memory := make([]int64, len(works))
	for range rounds {
		for i, w := range works {
			t, m, err := timed(w.args)
			if err != nil {
				return fmt.Errorf("%s: %w", w.name, err)
			}
			times[i] = append(times[i], t)
			memory[i] = max(memory[i], m)
		}
	}
	for i, w := range works {
		slices.Sort(times[i])
		fmt.Printf("%-58s %8.1f ms (%.1f) %6.0f MB\n", w.name, ms(times[i][0]), ms(times[i][len(times[i])/2]), float64(memory[i])/1e6)
	}
	return nil
}

func ms(d time.Duration) float64 { return float64(d) / float64(time.Millisecond) }
