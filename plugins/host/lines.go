package host

import (
	"bytes"
	"sync"
)

const (
	keptLines  = 40
	lineLength = 400
)

// lines keeps the last lines written to it and passes each on.
type lines struct {
	each func(line string)

	mu   sync.Mutex
	last []string
	part []byte
}

// Write takes bytes in any portions; it never fails.
func (l *lines) Write(p []byte) (int, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	for rest := p; len(rest) > 0; {
		i := bytes.IndexByte(rest, '\n')
		if i < 0 {
			l.grow(rest)
			break
		}
		l.grow(rest[:i])
		l.flush()
		rest = rest[i+1:]
	}
	return len(p), nil
}

// grow keeps the head of a line that is too long to show.
func (l *lines) grow(p []byte) {
	if room := lineLength - len(l.part); room < len(p) {
		p = p[:max(room, 0)]
	}
	l.part = append(l.part, p...)
}

func (l *lines) flush() {
	line := string(bytes.ToValidUTF8(bytes.TrimRight(l.part, "\r"), []byte("?")))
	l.part = l.part[:0]
	if line == "" {
		return
	}
	if len(l.last) == keptLines {
		l.last = append(l.last[:0], l.last[1:]...)
	}
	l.last = append(l.last, line)
	if l.each != nil {
		l.each(line)
	}
}

// Last gives the lines kept, oldest first, with one that has not ended.
func (l *lines) Last() []string {
	l.mu.Lock()
	defer l.mu.Unlock()
	if len(l.part) > 0 {
		l.flush()
	}
	return append([]string(nil), l.last...)
}
