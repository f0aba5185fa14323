package parquetfile

import (
	"bytes"
	"fmt"
	"io"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/s2"
	"github.com/klauspost/compress/zstd"
	"github.com/xitongsys/parquet-go/parquet"
)

// inflater decompresses pages of one file. It is not for two goroutines.
type inflater struct {
	gzip *gzip.Reader
	zstd *zstd.Decoder
	from bytes.Reader
}

// knownCodec tells whether pages in this codec can be read.
func knownCodec(c parquet.CompressionCodec) bool {
	switch c {
	case parquet.CompressionCodec_UNCOMPRESSED, parquet.CompressionCodec_SNAPPY, parquet.CompressionCodec_GZIP, parquet.CompressionCodec_ZSTD:
		return true
	}
	return false
}

// inflate fills dst from src; the data must have just that size.
func (d *inflater) inflate(dst, src []byte, codec parquet.CompressionCodec) error {
	var err error
	switch codec {
	case parquet.CompressionCodec_SNAPPY:
		err = inflateSnappy(dst, src)
	case parquet.CompressionCodec_GZIP:
		err = d.inflateGzip(dst, src)
	case parquet.CompressionCodec_ZSTD:
		err = d.inflateZstd(dst, src)
	default:
		err = fmt.Errorf("cannot be read")
	}
	if err != nil {
		return fmt.Errorf("%s data: %w", codec, err)
	}
	return nil
}

func wrongSize(got, want int) error {
	return fmt.Errorf("decompress to %d bytes, want %d as the page says", got, want)
}

func inflateSnappy(dst, src []byte) error {
	n, err := s2.DecodedLen(src)
	if err != nil {
		return err
	}
	if n != len(dst) {
		return wrongSize(n, len(dst))
	}
	_, err = s2.Decode(dst, src)
	return err
}

// inflateGzip reads all members of src.
func (d *inflater) inflateGzip(dst, src []byte) (err error) {
	d.from.Reset(src)
	if d.gzip == nil {
		d.gzip, err = gzip.NewReader(&d.from)
	} else {
		err = d.gzip.Reset(&d.from)
	}
	if err != nil {
		return err
	}
	if n, err := io.ReadFull(d.gzip, dst); err == io.EOF || err == io.ErrUnexpectedEOF && d.from.Len() == 0 {
		return wrongSize(n, len(dst))
	} else if err != nil {
		return err
	}
	var more [1]byte
	switch n, err := d.gzip.Read(more[:]); {
	case n > 0:
		return fmt.Errorf("decompress to more than %d bytes, want that many as the page says", len(dst))
	case err != io.EOF:
		return err
	}
	return nil
}

func (d *inflater) inflateZstd(dst, src []byte) (err error) {
	if d.zstd == nil {
		d.zstd, err = zstd.NewReader(nil, zstd.WithDecoderConcurrency(1), zstd.WithDecoderLowmem(true),
			zstd.WithDecoderMaxMemory(maxPageBytes), zstd.WithDecodeAllCapLimit(true))
		if err != nil {
			return err
		}
	}
	out, err := d.zstd.DecodeAll(src, dst[:0:len(dst)])
	if err != nil {
		return err
	}
	if len(out) != len(dst) {
		return wrongSize(len(out), len(dst))
	}
	return nil
}

func (d *inflater) close() {
	if d.zstd != nil {
		d.zstd.Close()
	}
}
