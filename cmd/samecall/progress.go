package main

import (
	"fmt"
	"io"
	"sync"
	"sync/atomic"
	"time"
)

// progress shows on a terminal what the program is at, once it has taken
// more than a second. Elsewhere it shows nothing.
type progress struct {
	stage atomic.Pointer[string]
	stop  chan struct{}
	once  sync.Once
	done  sync.WaitGroup
}

func newProgress(w io.Writer) *progress {
	p := &progress{stop: make(chan struct{})}
	if _, ok := asTerminal(w); !ok {
		return p
	}
	p.done.Go(func() {
		shown := false
		ticks := time.NewTicker(250 * time.Millisecond)
		defer ticks.Stop()
		begun := time.Now()
		for {
			select {
			case <-p.stop:
				if shown {
					fmt.Fprint(w, "\r\x1b[K")
				}
				return
			case <-ticks.C:
				if s := p.stage.Load(); s != nil && time.Since(begun) > time.Second {
					fmt.Fprintf(w, "\r\x1b[K%s … %.0f s", *s, time.Since(begun).Seconds())
					shown = true
				}
			}
		}
	})
	return p
}

func (p *progress) at(stage string) { p.stage.Store(&stage) }

// end clears the line; nothing is shown after it returns. It may be called
// again.
func (p *progress) end() {
	p.once.Do(func() { close(p.stop) })
	p.done.Wait()
}
