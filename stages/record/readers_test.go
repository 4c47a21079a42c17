package record

import (
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
)

// One signal, a tone of 120 Hz and 3 m/s² peak, written as text, as WAV and as binary records, gives one spectrum.
func TestReadersAgree(t *testing.T) {
	const rate, n = 1600, 16000
	var text strings.Builder
	text.WriteString("time_s,ax\n")
	var flat, samples []byte
	for i := range n {
		// Whole numbers of 1/1000 m/s² are exact in all three.
		v := int16(math.Round(3000 * math.Sin(2*math.Pi*120*float64(i)/rate)))
		fmt.Fprintf(&text, "%g,%g\n", float64(i)/rate, float64(v)/1000)
		flat = binary.BigEndian.AppendUint32(flat, uint32(i*625))
		flat = binary.BigEndian.AppendUint16(flat, uint16(v))
		samples = binary.LittleEndian.AppendUint16(samples, uint16(v))
	}
	head := binary.LittleEndian.AppendUint32([]byte("RIFF\x00\x00\x00\x00WAVEfmt "), 16)
	for _, v := range []uint16{1, 1} {
		head = binary.LittleEndian.AppendUint16(head, v)
	}
	head = binary.LittleEndian.AppendUint32(binary.LittleEndian.AppendUint32(head, rate), 2*rate)
	head = binary.LittleEndian.AppendUint16(binary.LittleEndian.AppendUint16(head, 2), 16)
	wav := append(binary.LittleEndian.AppendUint32(append(head, "data"...), uint32(len(samples))), samples...)
	folder := t.TempDir()
	for name, data := range map[string][]byte{"a.csv": []byte(text.String()), "a.wav": wav, "a.bin": append([]byte("HEAD"), flat...)} {
		if err := os.WriteFile(filepath.Join(folder, name), data, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	plain, _, err := run(t, folder, stage.Arguments{"file": "a.csv", "units": map[string]any{"ax": "m/s2"}})
	if err != nil {
		t.Fatal(err)
	}
	for name, arguments := range map[string]stage.Arguments{
		"a.wav": {"columns": map[string]any{"x": "channel_1"}, "units": map[string]any{"channel_1": "m/s2"}, "options": map[string]any{"scale": "32.768"}},
		"a.bin": {"reader": "flat", "options": map[string]any{"fields": "time_us:u32, ax:i16:0.001", "byte_order": "big", "header": "4"}, "units": map[string]any{"ax": "m/s2"}},
	} {
		arguments["file"] = name
		s, _, err := run(t, folder, arguments)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if math.Abs(s.Rate-rate) > 1e-6*rate || len(s.Axes) != 1 || len(s.Axes[0].Density) != len(plain.Axes[0].Density) {
			t.Fatalf("%s: rate %g, %d axes", name, s.Rate, len(s.Axes))
		}
		largest := 0.0
		for k, v := range s.Axes[0].Density {
			largest = max(largest, v)
			if math.Abs(v-plain.Axes[0].Density[k]) > 1e-9*(1+v) {
				t.Fatalf("%s: bin %d is %g, the text has %g", name, k, v, plain.Axes[0].Density[k])
			}
		}
		if math.Abs(s.Axes[0].Deviation-3/math.Sqrt2) > 1e-3 {
			t.Errorf("%s: deviation %g", name, s.Axes[0].Deviation)
		}
	}
	_, _, err = run(t, folder, stage.Arguments{"file": "a.csv", "reader": "wav"})
	var f *fault.Error
	if !errors.As(err, &f) || f.Argument != "reader" || !strings.Contains(f.Remedy, `did you mean "wave"?`) {
		t.Errorf("%v", err)
	}
	if _, _, err = run(t, folder, stage.Arguments{"file": "a.bin"}); !errors.As(err, &f) || !strings.Contains(f.Text, "this is not text") {
		t.Errorf("%v", err)
	}
}
