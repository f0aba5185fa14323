package parquetfile

import (
	"bytes"
	"context"
	"fmt"

	"github.com/apache/thrift/lib/go/thrift"
)

var limits = &thrift.TConfiguration{
	MaxMessageSize:   maxFooterBytes,
	MaxFrameSize:     maxFooterBytes,
	MaxContainerSize: maxListItems,
}

// What the parts of a structure take in memory, about: lists take room for their
// elements at once, as long as those are said to be, and a structure of one byte
// may have twenty pointers.
const (
	structBytes  = 128
	elementBytes = 24
	stringBytes  = 24 // beside its characters
)

// thrifty is a protocol that adds up the memory for what it reads. Without it
// 64 MiB of empty structures would take gigabytes.
type thrifty struct {
	thrift.TProtocol
	left int // bytes that may still be taken
}

func (p *thrifty) ReadStructBegin(ctx context.Context) (string, error) {
	if err := p.take(structBytes); err != nil {
		return "", err
	}
	return p.TProtocol.ReadStructBegin(ctx)
}

func (p *thrifty) ReadListBegin(ctx context.Context) (thrift.TType, int, error) {
	t, n, err := p.TProtocol.ReadListBegin(ctx)
	if err == nil {
		err = p.take(n * elementBytes)
	}
	return t, n, err
}

func (p *thrifty) ReadString(ctx context.Context) (string, error) {
	s, err := p.TProtocol.ReadString(ctx)
	if err == nil {
		err = p.take(stringBytes + len(s))
	}
	return s, err
}

func (p *thrifty) ReadBinary(ctx context.Context) ([]byte, error) {
	b, err := p.TProtocol.ReadBinary(ctx)
	if err == nil {
		err = p.take(stringBytes + len(b))
	}
	return b, err
}

func (p *thrifty) take(bytes int) error {
	if p.left -= bytes; p.left < 0 {
		return fmt.Errorf("it holds more than its size lets expect")
	}
	return nil
}

// readThrift reads a structure from the beginning of b and returns its length.
func readThrift(b []byte, s thrift.TStruct) (int, error) {
	buffer := &thrift.TMemoryBuffer{Buffer: bytes.NewBuffer(b)}
	p := &thrifty{thrift.NewTCompactProtocolConf(buffer, limits), thriftBase + thriftTimes*len(b)}
	if err := s.Read(context.Background(), p); err != nil {
		return 0, err
	}
	return len(b) - buffer.Len(), nil
}

// appendThrift writes a structure behind b.
func appendThrift(b []byte, s thrift.TStruct) ([]byte, error) {
	buffer := &thrift.TMemoryBuffer{Buffer: bytes.NewBuffer(b)}
	ctx := context.Background()
	p := thrift.NewTCompactProtocolConf(buffer, limits)
	if err := s.Write(ctx, p); err != nil {
		return b, err
	}
	return buffer.Bytes(), p.Flush(ctx)
}
