package pipeline

import (
	"context"
	"errors"
	"io"
	"slices"
	"sync"
	"testing"
	"time"

	"bentray/io/cloud"
)

// counter is a file of numbered chunks; with no limit it never ends.
type counter struct {
	cloud.Rewriter // nothing else is called
	next, limit    int
}

func (c *counter) Next(chunk *cloud.Chunk) error {
	if c.next == c.limit {
		return io.EOF
	}
	chunk.Rows = c.next
	c.next++
	return nil
}

func TestFlowKeepsTheOrder(t *testing.T) {
	const chunks = 200
	var got []int
	err := newEngine(7).flow(context.Background(), &counter{limit: chunks}, func(s *slot) error {
		time.Sleep(time.Duration(s.chunk.Rows%5) * 100 * time.Microsecond) // later chunks are often ready first
		return nil
	}, func(s *slot) error {
		got = append(got, s.chunk.Rows)
		return nil
	})
	if err != nil || len(got) != chunks || !slices.IsSorted(got) {
		t.Errorf("%v, chunks were put in the order %v", err, got)
	}
}

// The error is the first in the order of the file, whichever is found first; it
// ends the reading of a file that would go on for ever.
func TestFlowEndsWithTheFirstErrorOfTheFile(t *testing.T) {
	first, second := errors.New("first"), errors.New("second")
	found := make(chan struct{})
	var once sync.Once
	e := newEngine(4)
	err := e.flow(context.Background(), &counter{limit: -1}, func(s *slot) error {
		switch s.chunk.Rows {
		case 2:
			<-found
			return first
		case 4:
			once.Do(func() { close(found) })
			return second
		}
		return nil
	}, func(*slot) error { return nil })
	if err != first {
		t.Errorf("got %v, want the first", err)
	}
	if len(e.slots) != cap(e.slots) {
		t.Errorf("%d of %d slots came back", len(e.slots), cap(e.slots))
	}
}

func TestFlowEndsWhenCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	e := newEngine(2)
	err := e.flow(ctx, &counter{limit: -1}, func(s *slot) error {
		if s.chunk.Rows == 20 {
			cancel()
		}
		return nil
	}, func(*slot) error { return nil })
	if !errors.Is(err, context.Canceled) || len(e.slots) != cap(e.slots) {
		t.Errorf("got %v with %d of %d slots back", err, len(e.slots), cap(e.slots))
	}
}
