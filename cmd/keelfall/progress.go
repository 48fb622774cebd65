package main

import (
	"fmt"
	"io"
	"sync"
	"time"
)

// patience is how long a command is silent about what it computes.
const patience = 2 * time.Second

// progress says what is being computed, once a command takes longer than a while.
type progress struct {
	mu    sync.Mutex
	to    io.Writer
	stage string
	late  bool
	done  bool
	timer *time.Timer
}

// newProgress starts a command's clock; after says how long it is silent.
func newProgress(to io.Writer, after time.Duration) *progress {
	p := &progress{to: to}
	p.mu.Lock()
	defer p.mu.Unlock()
	p.timer = time.AfterFunc(after, func() {
		p.mu.Lock()
		defer p.mu.Unlock()
		p.late = true
		p.print()
	})
	return p
}

// say names what is computed from now on.
func (p *progress) say(stage string) {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.stage = stage
	if p.late {
		p.print()
	}
}

func (p *progress) print() {
	if !p.done && p.stage != "" {
		fmt.Fprintf(p.to, "computing %s\n", p.stage)
	}
}

// stop ends it; nothing is said any more.
func (p *progress) stop() {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.done = true
	p.timer.Stop()
}
