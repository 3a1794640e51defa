package session

import (
	"context"
	"sync"
)

// Jobs is the table of requests that are being worked on, so that the page can cancel them. The zero value is empty.
type Jobs struct {
	mu   sync.Mutex
	open map[int64]context.CancelFunc
}

// Begin enters a request and returns the context of its work, and what to call when the work is over.
func (j *Jobs) Begin(parent context.Context, id int64) (ctx context.Context, end func()) {
	ctx, cancel := context.WithCancel(parent)
	j.mu.Lock()
	defer j.mu.Unlock()
	if j.open == nil {
		j.open = map[int64]context.CancelFunc{}
	}
	j.open[id] = cancel
	return ctx, func() {
		j.mu.Lock()
		defer j.mu.Unlock()
		cancel()
		delete(j.open, id)
	}
}

// Cancel ends the work on the request; 0 ends all. Requests that are over are ignored.
func (j *Jobs) Cancel(id int64) { j.end(func(k int64) bool { return id == 0 || k == id }) }

// Keep ends all work but that on the request.
func (j *Jobs) Keep(id int64) { j.end(func(k int64) bool { return k != id }) }

func (j *Jobs) end(meant func(id int64) bool) {
	j.mu.Lock()
	defer j.mu.Unlock()
	for k, cancel := range j.open {
		if meant(k) {
			cancel()
		}
	}
}
