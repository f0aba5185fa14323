package pipeline

import (
	"context"
	"io"

	"bentray/io/cloud"
)

// engine shares chunks and processor time among the files of a run.
type engine struct {
	slots chan *slot    // free ones; their number bounds the memory
	turns chan struct{} // a turn is taken for work between Next and Put
}

// slot is a chunk with what it takes to correct it.
type slot struct {
	chunk cloud.Chunk
	work  workspace
	tally *tally
	found *deviations // of an audit
	done  chan error  // the chunk's work has ended
}

// spareSlots are beyond the workers': one being read, one being written, one waiting.
const spareSlots = 3

func newEngine(workers int) *engine {
	e := &engine{slots: make(chan *slot, workers+spareSlots), turns: make(chan struct{}, workers)}
	for range cap(e.slots) {
		e.slots <- &slot{done: make(chan error, 1)}
	}
	return e
}

// flow moves all chunks of a file from its Next to put. Between them work is
// done side by side, over all files together by as many as there are turns. Its
// error is the first in the order of the file.
func (e *engine) flow(ctx context.Context, file cloud.Rewriter, work, put func(*slot) error) error {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	order := make(chan *slot, cap(e.slots))
	var readErr error
	go func() {
		defer close(order)
		readErr = e.read(ctx, file, order, work)
	}()
	var firstErr error
	for s := range order {
		err := <-s.done
		if err == nil && firstErr == nil {
			err = put(s)
		}
		if err != nil && firstErr == nil {
			firstErr = err
			cancel()
		}
		e.slots <- s
	}
	if firstErr == nil {
		firstErr = readErr
	}
	return firstErr
}

// read takes chunks from the file, starts their work and queues them in order.
func (e *engine) read(ctx context.Context, file cloud.Rewriter, order chan<- *slot, work func(*slot) error) error {
	for {
		var s *slot
		select {
		case s = <-e.slots:
		case <-ctx.Done():
			return ctx.Err()
		}
		if err := file.Next(&s.chunk); err != nil {
			e.slots <- s
			if err == io.EOF {
				return ctx.Err()
			}
			return err
		}
		order <- s // has room for every slot
		go func() {
			e.turns <- struct{}{}
			s.done <- work(s)
			<-e.turns
		}()
	}
}
