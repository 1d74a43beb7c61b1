package study

import (
	"bufio"
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
	"testing"
)

// rowOrder gives, for the row i of n, the number of the call that it holds,
// where calls are numbered part by part, ten to a part.
type rowOrder func(i, n int) int

var rowOrders = []struct {
	name  string
	order rowOrder
}{
	{"by part", func(i, n int) int { return i }},
	{"by trial", func(i, n int) int { return i%(n/10)*10 + i/(n/10) }},
	// Multiplying by a number that shares no factor with n visits each once.
	{"shuffled", func(i, n int) int { return int(uint64(i) * 611953 % uint64(n)) }},
}

// writeCalls writes a long table of n calls: ten on each part, two
// appraisers, five trials. Ten million rows take 219 MB.
func writeCalls(tb testing.TB, n int, order rowOrder) string {
	tb.Helper()
	file := filepath.Join(tb.TempDir(), "calls.csv")
	f, err := os.Create(file)
	if err != nil {
		tb.Fatal(err)
	}
	w := bufio.NewWriterSize(f, 1<<20)
	fmt.Fprintln(w, "part,appraiser,trial,call,reference,value")
	var b []byte
	for i := range n {
		call := order(i, n)
		part := call / 10
		value := 100 + part*7919%800
		good := byte('1')
		if value > 600 {
			good = '0'
		}
		said := good
		if uint32(call)*2654435761>>28 == 0 { // one call in sixteen is wrong
			said ^= 1
		}
		b = strconv.AppendInt(b[:0], int64(part), 10)
		b = append(b, ',', "AB"[call%10/5], ',', byte('1'+call%5), ',', said, ',', good, ',', '0', '.')
		b = append(strconv.AppendInt(b, int64(value), 10), '\n')
		w.Write(b)
	}
	if err := w.Flush(); err != nil {
		tb.Fatal(err)
	}
	if err := f.Close(); err != nil {
		tb.Fatal(err)
	}
	return file
}

// BenchmarkRead reads long tables of a million and of ten million calls.
// Memory is the peak of the process so far: run one order at a time to
// compare it.
func BenchmarkRead(b *testing.B) {
	for _, n := range []int{1_000_000, 10_000_000} {
		for _, o := range rowOrders {
			b.Run(fmt.Sprintf("%d %s", n, o.name), func(b *testing.B) {
				file := writeCalls(b, n, o.order)
				info, err := os.Stat(file)
				if err != nil {
					b.Fatal(err)
				}
				b.SetBytes(info.Size())
				b.ReportAllocs()
				before := cpuSeconds()
				b.ResetTimer()
				for b.Loop() {
					s, err := Read(Source{Path: file}, Settings{})
					if err != nil {
						b.Fatal(err)
					}
					if made, _ := s.Ratings.Count(); made != n {
						b.Fatalf("%d calls, want %d", made, n)
					}
				}
				b.StopTimer()
				b.ReportMetric((cpuSeconds()-before)/float64(b.N), "cpu-s/op")
				var use syscall.Rusage
				if err := syscall.Getrusage(syscall.RUSAGE_SELF, &use); err == nil {
					b.ReportMetric(float64(use.Maxrss)/1024, "peak-MB")
				}
			})
		}
	}
}

func BenchmarkReadQuoted(b *testing.B) {
	text, err := os.ReadFile(writeCalls(b, 1_000_000, rowOrders[0].order))
	if err != nil {
		b.Fatal(err)
	}
	file := filepath.Join(b.TempDir(), "quoted.csv")
	if err := os.WriteFile(file, []byte(strings.Replace(string(text), "part,", `"part",`, 1)+"\"x\",A,1,1,1,0.5\n"), 0o600); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := Read(Source{Path: file}, Settings{}); err != nil {
			b.Fatal(err)
		}
	}
}

// cpuSeconds is the time that all cores have spent on this process, which a
// busy machine does not stretch as it stretches wall time.
func cpuSeconds() float64 {
	var use syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &use); err != nil {
		return 0
	}
	return float64(use.Utime.Nano()+use.Stime.Nano()) / 1e9
}

// BenchmarkNames compares partTable with a map on a million names that come
// ten times each, in the two orders that the prediction does not help or
// helps.
func BenchmarkNames(b *testing.B) {
	const parts, rows = 1_000_000, 10_000_000
	names := make([][]byte, parts)
	for i := range names {
		names[i] = strconv.AppendInt(nil, int64(i), 10)
	}
	for _, o := range rowOrders {
		b.Run("table "+o.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				t := newPartTable()
				for i := range rows {
					name := names[o.order(i, rows)/10]
					if _, _, ok := t.find(name); !ok {
						t.add(name, nil, uint32(i))
					}
				}
			}
		})
		b.Run("map "+o.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				t := make(map[string]uint32)
				for i := range rows {
					name := names[o.order(i, rows)/10]
					if _, ok := t[string(name)]; !ok {
						t[string(name)] = uint32(len(t))
					}
				}
			}
		})
	}
}
