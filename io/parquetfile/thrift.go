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

// thrifty is a protocol that counts what takes more memory than bytes. Without
// it 64 MiB of empty structures would take gigabytes.
type thrifty struct {
	thrift.TProtocol
	left int // structures and strings that may still be read
}

func (p *thrifty) ReadStructBegin(ctx context.Context) (string, error) {
	if err := p.count(); err != nil {
		return "", err
	}
	return p.TProtocol.ReadStructBegin(ctx)
}

func (p *thrifty) ReadString(ctx context.Context) (string, error) {
	if err := p.count(); err != nil {
		return "", err
	}
	return p.TProtocol.ReadString(ctx)
}

func (p *thrifty) count() error {
	if p.left == 0 {
		return fmt.Errorf("it holds more structures than its size lets expect")
	}
	p.left--
	return nil
}

// readThrift reads a structure from the beginning of b and returns its length.
func readThrift(b []byte, s thrift.TStruct) (int, error) {
	buffer := &thrift.TMemoryBuffer{Buffer: bytes.NewBuffer(b)}
	p := &thrifty{thrift.NewTCompactProtocolConf(buffer, limits), maxSmallItems + len(b)/itemBytes}
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
