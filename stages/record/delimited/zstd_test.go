package delimited

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"strings"
	"testing"

	"github.com/klauspost/compress/zstd"

	"hushframe/core/signal/recording"
)

// Text packed with zstd reads as the text; cut off or damaged it says so.
func TestZstd(t *testing.T) {
	var text strings.Builder
	text.WriteString("t,gx\n")
	for i := range 5000 {
		fmt.Fprintf(&text, "%d,%d\n", i, i*i%977)
	}
	var packed bytes.Buffer
	w, err := zstd.NewWriter(&packed)
	if err != nil {
		t.Fatal(err)
	}
	w.Write([]byte(text.String()))
	w.Close()
	request := recording.Request{Columns: []string{"gx"}, Time: "t", TimeUnit: 1}
	plain, err := readAll(strings.NewReader(text.String()), request)
	if err != nil {
		t.Fatal(err)
	}
	got, err := readAll(bytes.NewReader(packed.Bytes()), request)
	if err != nil || !same(got.values[0], plain.values[0]) || !same(got.time, plain.time) || len(got.time) != 5000 {
		t.Fatalf("%d rows, %v", len(got.time), err)
	}
	var e *recording.Error
	if _, err = readAll(bytes.NewReader(packed.Bytes()[:packed.Len()/2]), request); !errors.As(err, &e) || !strings.Contains(e.Text, "ends in its middle") {
		t.Errorf("half of it: %v", err)
	}
	hurt := bytes.Clone(packed.Bytes())
	hurt[len(hurt)-2] ^= 0x55 // the checksum
	if _, err = readAll(bytes.NewReader(hurt), request); !errors.As(err, &e) || !strings.Contains(e.Text, "damaged") {
		t.Errorf("a turned bit: %v", err)
	}
	if _, err = (Reader{}).Inspect(context.Background(), bytes.NewReader([]byte{0x28, 0xb5, 0x2f, 0xfd}), nil); !errors.As(err, &e) {
		t.Errorf("the mark alone: %v", err)
	}
}
