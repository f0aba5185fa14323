package quality

import (
	"bytes"
	"context"
	"hash/maphash"
	"io"

	"bentray/io/cloud"
)

// side is one file of a pair, decoded ahead in a goroutine of its own.
type side struct {
	file   table
	filled chan *cloud.Chunk
	free   chan *cloud.Chunk
	chunks int   // in being
	err    error // what ended reading, once filled is closed

	queue []*cloud.Chunk // decoded and not done with; the first is the one at hand
	at    int            // its next row
	done  int64          // rows done with
	ended bool
	took  func(*cloud.Chunk) // called for every chunk in order
}

// aheadChunks are decoded before they are asked for, beside the one at hand.
const aheadChunks = 2

// startSide reads a file, for which Begin was called, until the context ends.
func startSide(ctx context.Context, file table, took func(*cloud.Chunk)) *side {
	s := &side{file: file, filled: make(chan *cloud.Chunk), free: make(chan *cloud.Chunk, window+aheadChunks+1), took: took}
	for range aheadChunks {
		s.grow()
	}
	go func() {
		defer close(s.filled)
		s.err = s.read(ctx)
	}()
	return s
}

func (s *side) grow() {
	s.chunks++
	s.free <- new(cloud.Chunk)
}

func (s *side) read(ctx context.Context) error {
	for {
		var c *cloud.Chunk
		select {
		case c = <-s.free:
		case <-ctx.Done():
			return ctx.Err()
		}
		if err := s.file.Next(c); err == io.EOF {
			return nil
		} else if err != nil {
			return err
		}
		if err := s.file.Decode(c); err != nil {
			return err
		}
		select {
		case s.filled <- c:
		case <-ctx.Done():
			return ctx.Err()
		}
	}
}

// wait ends when the goroutine has, after the context was cancelled.
func (s *side) wait() {
	for range s.filled {
	}
}

// more takes another chunk into the queue; false at the end of the file.
func (s *side) more() (bool, error) {
	if s.ended {
		return false, s.err
	}
	if s.chunks == len(s.queue) {
		s.grow()
	}
	c, ok := <-s.filled
	if !ok {
		s.ended = true
		return false, s.err
	}
	s.took(c)
	s.queue = append(s.queue, c)
	return true, nil
}

// ready makes the next row one of the chunk at hand; false at the end of the file.
func (s *side) ready() (bool, error) {
	for {
		for len(s.queue) > 0 && s.at == s.queue[0].Rows {
			s.free <- s.queue[0]
			s.queue, s.at = s.queue[1:], 0
		}
		if len(s.queue) > 0 {
			return true, nil
		}
		if ok, err := s.more(); !ok {
			return false, err
		}
	}
}

// left counts the rows of the chunk at hand.
func (s *side) left() int { return s.queue[0].Rows - s.at }

// pass is done with rows of the chunk at hand.
func (s *side) pass(rows int) {
	s.at += rows
	s.done += int64(rows)
}

// row finds the row k behind the next one; false where the file has none.
func (s *side) row(k int) (c *cloud.Chunk, at int, ok bool, err error) {
	at = s.at + k
	for i := 0; ; i++ {
		for i >= len(s.queue) {
			if ok, err := s.more(); !ok {
				return nil, 0, false, err
			}
		}
		if c := s.queue[i]; at < c.Rows {
			return c, at, true, nil
		}
		at -= s.queue[i].Rows
	}
}

var seed = maphash.MakeSeed()

// keyOf is a number that rows with equal raw coordinates share; those are the first
// columns of a chunk's stored ones.
func keyOf(c *cloud.Chunk, at, coordinates int) uint64 {
	var h maphash.Hash
	h.SetSeed(seed)
	for k := range c.Stored[:coordinates] {
		v := c.Stored[k].At(at)
		h.Write([]byte{byte(len(v))})
		h.Write(v)
	}
	return h.Sum64()
}

// equalRows tells whether a column has the same values in rows of two chunks.
func equalRows(a *cloud.Texts, atA int, b *cloud.Texts, atB, rows int) bool {
	beginA, beginB := begin(a, atA), begin(b, atB)
	if !bytes.Equal(a.Bytes[beginA:a.Ends[atA+rows-1]], b.Bytes[beginB:b.Ends[atB+rows-1]]) {
		return false
	}
	for i := range rows {
		if a.Ends[atA+i]-beginA != b.Ends[atB+i]-beginB {
			return false
		}
	}
	return true
}

func begin(t *cloud.Texts, at int) int {
	if at == 0 {
		return 0
	}
	return t.Ends[at-1]
}
