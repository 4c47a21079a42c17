package delimited

import (
	"bytes"
	"context"
	"errors"
	"testing"

	"hushframe/core/signal/recording"
)

// Whatever the bytes, the reader ends with samples or with an *Error that has a remedy, and batches are consistent.
func FuzzRead(f *testing.F) {
	for _, text := range []string{
		"t,a,b\n0,1,2\n1,3,4\n", "\ufefft;a\r\n0;1\r\n1;-3", "# t gx\n0 5\n1 6\n", "t;gx\n0,5;1,25\n1,5;2,5\n", "\"t, s\",\"gx\"\n\"0\",\"5\"\n",
		"time [s],gyro x (deg/s)\n0,1\n1,2\n", "t\ta\ns\tdeg/s\n0\t1e400\n1\t\n2", "1730147596612924198,1\n1730147596613923328,2\n", "\x1f\x8b\x08\x00", "\x28\xb5\x2f\xfd\x04\x00",
	} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		h, err := Reader{}.Inspect(context.Background(), bytes.NewReader(data), nil)
		if err != nil {
			remedied(t, err)
			return
		}
		request := recording.Request{TimeUnit: 1}
		for _, c := range h.Columns {
			if i, err := find(h.Names(), c.Name); err != nil || h.Columns[i].Text {
				continue
			}
			if request.Time == "" {
				request.Time = c.Name
			} else {
				request.Columns = append(request.Columns, c.Name)
			}
		}
		rows := int64(0)
		err = Reader{}.Read(context.Background(), bytes.NewReader(data), request, func(b recording.Batch) error {
			if b.First != rows+1 {
				t.Fatalf("a batch begins at row %d after %d", b.First, rows)
			}
			for _, v := range b.Values {
				if len(v) != b.Rows() {
					t.Fatalf("%d values for %d rows", len(v), b.Rows())
				}
			}
			rows += int64(b.Rows())
			return nil
		})
		if err != nil {
			remedied(t, err)
		}
	})
}

func remedied(t *testing.T, err error) {
	var e *recording.Error
	if !errors.As(err, &e) || e.Remedy == "" || e.Text == "" {
		t.Fatalf("%v", err)
	}
}
