package main

import (
	"bytes"
	"context"
	"encoding/binary"
	"flag"
	"hash/crc32"
	"math"
	"os"
	"strings"
	"testing"

	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
	"hushframe/plugins/plugintest"
)

// write makes a recording of three gyro channels by the README: blocks of 64 rows at 2 kHz, without those listed.
func write(blocks int, lost ...int) []byte {
	le := binary.LittleEndian
	b := []byte("PEBBLE1\n\x03\x00\x00\x00")
	for _, name := range []string{"gx", "gy", "gz"} {
		b = append(b, append([]byte(name), make([]byte, 10)...)...)
		b = append(b, "deg/s\x00\x00\x00"...)
		b = le.AppendUint32(b, math.Float32bits(0.0625))
	}
	for k := range blocks {
		skip := false
		for _, l := range lost {
			skip = skip || l == k
		}
		if skip {
			continue
		}
		block := []byte("BK\x40\x00")
		block = le.AppendUint64(block, uint64(5_000_000+k*64*500))
		block = le.AppendUint32(block, 500_000)
		for r := range 64 {
			t := float64(k*64+r) / 2000
			for c := range 3 {
				block = le.AppendUint16(block, uint16(int16(1600+800*math.Sin(2*math.Pi*120*t+float64(c)))))
			}
		}
		b = append(b, block...)
		b = le.AppendUint32(b, crc32.ChecksumIEEE(block))
	}
	return b
}

func recordings() []plugintest.Recording {
	units := map[string]string{"gx": "deg/s", "gy": "deg/s", "gz": "deg/s"}
	hurt := write(25)
	hurt[84+10*404+100] ^= 1 // in the tenth block: the header has 84 bytes, a block 404
	return []plugintest.Recording{
		// The mean of 1600 counts of 1/16 deg/s is 100 deg/s.
		{Name: "whole", Data: write(25), Units: units, Rate: 2000, Rows: 1600, Mean: map[string]float64{"gx": 100, "gz": 100}},
		{Name: "with lost blocks", Data: write(25, 7, 8, 15), Units: units, Rate: 2000, Rows: 1408, Gaps: 2},
		{Name: "with a damaged block", Data: hurt, Units: units, Rate: 2000, Rows: 1536, Gaps: 1},
	}
}

func TestReader(t *testing.T) {
	plugintest.Reader(t, Reader{}, recordings()...)
}

func TestReaderProcess(t *testing.T) {
	plugintest.Reader(t, plugintest.ReaderProcess(t, ".", "pebble"), recordings()...)
}

func TestDamagedRefused(t *testing.T) {
	err := Reader{}.Read(context.Background(), bytes.NewReader(recordings()[2].Data), stage.Arguments{"damaged": "refuse"}, recording.Request{Columns: []string{"gx"}},
		func(recording.Batch) error { return nil })
	if e, ok := err.(*recording.Error); !ok || e.Byte != 84+10*404 || e.Row != 641 || !strings.Contains(e.Text, "checksum") {
		t.Errorf("%+v", err)
	}
}

var update = flag.Bool("update", false, "write the recording of jobs/extensions anew")

// The recording of the recipe is one that the format describes: 3.2 s with a lost block.
func TestRecipeRecording(t *testing.T) {
	const path = "../../jobs/extensions/bench.pebble"
	want := write(100, 40)
	if *update {
		if err := os.WriteFile(path, want, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	if got, err := os.ReadFile(path); err != nil || !bytes.Equal(got, want) {
		t.Errorf("%s is not what the format makes of the samples (%v); run the test with -update", path, err)
	}
}
