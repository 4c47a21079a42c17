package job

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"sort"
	"strings"
	"unicode/utf8"

	"github.com/hashicorp/hcl/v2"
	"github.com/hashicorp/hcl/v2/hclsyntax"

	"hushframe/core/pipeline/nearest"
)

// Bounds that no sensible job meets; they keep the recursive parser within its
// stack.
const (
	longestSource     = 1 << 20
	deepest           = 200
	longestExpression = 2000
)

// read finds and parses the files of a job.
func (l *loader) read(path string) []*hclsyntax.Body {
	nowhere := func(summary, format string, args ...any) {
		l.wrong(hcl.Range{}, summary, format, args...)
		l.diags[len(l.diags)-1].Subject = nil
	}
	info, err := os.Stat(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		text := "there is no file or folder " + path
		if near := nearFile(path); near != "" {
			text += "; did you mean " + near + "?"
		}
		nowhere("No such job", "%s", text)
		return nil
	case err != nil:
		nowhere("Job cannot be read", "%v", err)
		return nil
	}
	if !info.IsDir() {
		l.job.Folder = filepath.Dir(path)
		if body := l.file(path); body != nil {
			return []*hclsyntax.Body{body}
		}
		return nil
	}
	l.job.Folder = path
	names, err := filepath.Glob(filepath.Join(globSafe(path), "*.hcl"))
	if err != nil || len(names) == 0 {
		nowhere("No job here", "the folder %s holds no .hcl file", path)
		return nil
	}
	sort.Strings(names)
	var bodies []*hclsyntax.Body
	for _, name := range names {
		body := l.file(name)
		if body == nil {
			continue
		}
		if foreign(body) {
			l.job.Passed = append(l.job.Passed, filepath.Base(name))
			l.job.Sources = l.job.Sources[:len(l.job.Sources)-1]
			continue
		}
		bodies = append(bodies, body)
	}
	if len(bodies) == 0 && !l.diags.HasErrors() {
		nowhere("No job here", "no .hcl file in the folder %s holds a block of a job (%s)", path, enumerate(blockNames()))
	}
	return bodies
}

// globSafe escapes the characters that a pattern would take for its own.
func globSafe(path string) string {
	return strings.NewReplacer(`[`, `[[]`, `*`, `[*]`, `?`, `[?]`).Replace(path)
}

// foreign reports whether a file of a job folder belongs to another language
// (an airframe): it has blocks or arguments, and none is or nearly is a block of
// a job.
func foreign(body *hclsyntax.Body) bool {
	var names []string
	for _, b := range body.Blocks {
		names = append(names, b.Type)
	}
	for n := range body.Attributes {
		names = append(names, n)
	}
	for _, n := range names {
		if nearest.Name(n, blockNames()) != "" {
			return false
		}
	}
	return true
}

// nearFile gives the path that was meant by one that does not exist.
func nearFile(path string) string {
	if near := nearEntry(path); near != "" {
		return filepath.Join(filepath.Dir(path), near)
	}
	return ""
}

// nearEntry gives the entry of its folder that was meant by a path.
func nearEntry(path string) string {
	entries, err := os.ReadDir(filepath.Dir(path))
	if err != nil {
		return ""
	}
	base := filepath.Base(path)
	var names []string
	for _, e := range entries {
		if strings.HasPrefix(e.Name(), ".") {
			continue
		}
		names = append(names, e.Name())
		if e.Name() == base+filepath.Ext(e.Name()) {
			return e.Name()
		}
	}
	return nearest.Name(base, names)
}

// file parses one file; the first thing wrong with its syntax is reported and
// the rest left out, since most of it would follow from the first.
func (l *loader) file(path string) *hclsyntax.Body {
	name := filepath.ToSlash(path)
	whole := hcl.Range{Filename: name, Start: hcl.InitialPos, End: hcl.InitialPos}
	info, err := os.Stat(path)
	if err == nil && info.Size() > longestSource {
		l.wrong(whole, "Not a job file", "the file has %d bytes, and a job file has at most %d", info.Size(), longestSource)
		return nil
	}
	src, err := os.ReadFile(path)
	if err != nil {
		l.wrong(whole, "Job cannot be read", "%v", err)
		return nil
	}
	body, d := parse(src, name)
	l.job.Sources = append(l.job.Sources, Source{Name: name, File: filepath.Base(path), Bytes: src})
	if d != nil {
		l.diags = append(l.diags, d)
		return nil
	}
	return body
}

func parse(src []byte, name string) (*hclsyntax.Body, *hcl.Diagnostic) {
	start := hcl.Range{Filename: name, Start: hcl.InitialPos, End: hcl.InitialPos}
	not := func(summary, detail string) (*hclsyntax.Body, *hcl.Diagnostic) {
		return nil, &hcl.Diagnostic{Severity: hcl.DiagError, Summary: summary, Detail: detail, Subject: &start}
	}
	if len(bytes.TrimSpace(src)) == 0 {
		return not("Empty file", `the file is empty; a job starts with job "name" { about = "…" }`)
	}
	if !utf8.Valid(src) || bytes.IndexByte(src, 0) >= 0 {
		return not("Not a job file", "the file is not UTF-8 text")
	}
	if d := nesting(src, name); d != nil {
		return nil, d
	}
	file, diags := hclsyntax.ParseConfig(src, name, hcl.InitialPos)
	for _, d := range diags {
		if d.Severity == hcl.DiagError {
			return nil, syntax(d, src, name)
		}
	}
	body := file.Body.(*hclsyntax.Body)
	Prepare(body)
	return body, nil
}

// syntax says of a mistake in the first words of a file that the whole file is
// something else.
func syntax(d *hcl.Diagnostic, src []byte, name string) *hcl.Diagnostic {
	tokens, _ := hclsyntax.LexConfig(src, name, hcl.InitialPos)
	for _, t := range tokens {
		switch t.Type {
		case hclsyntax.TokenComment, hclsyntax.TokenNewline:
			continue
		}
		if d.Subject == nil || d.Subject.Start.Line > t.Range.Start.Line {
			break
		}
		e := *d
		e.Summary = "Not a job file"
		e.Detail = `the file does not begin like a job, which is made of blocks such as job "name" { … }`
		return &e
	}
	return d
}

// nesting refuses text nested so deeply that parsing or evaluating it could
// exhaust the stack. Operators and steps of one expression nest as well.
func nesting(src []byte, name string) *hcl.Diagnostic {
	tokens, _ := hclsyntax.LexConfig(src, name, hcl.InitialPos)
	depth, row := 0, 0
	for _, t := range tokens {
		switch t.Type {
		case hclsyntax.TokenOBrace, hclsyntax.TokenOParen, hclsyntax.TokenOBrack, hclsyntax.TokenTemplateInterp,
			hclsyntax.TokenTemplateControl, hclsyntax.TokenOQuote, hclsyntax.TokenOHeredoc:
			depth++
		case hclsyntax.TokenCBrace, hclsyntax.TokenCParen, hclsyntax.TokenCBrack, hclsyntax.TokenTemplateSeqEnd,
			hclsyntax.TokenCQuote, hclsyntax.TokenCHeredoc:
			depth--
		}
		switch t.Type {
		case hclsyntax.TokenEqual, hclsyntax.TokenComma, hclsyntax.TokenOBrace:
			row = 0
		case hclsyntax.TokenIdent, hclsyntax.TokenNumberLit, hclsyntax.TokenNewline, hclsyntax.TokenComment,
			hclsyntax.TokenStringLit, hclsyntax.TokenQuotedLit:
		default:
			row++
		}
		if depth > deepest || row > longestExpression {
			return &hcl.Diagnostic{Severity: hcl.DiagError, Summary: "Nested too deeply",
				Detail:  fmt.Sprintf("expressions and blocks may be nested %d deep, and an expression may have %d operators", deepest, longestExpression),
				Subject: t.Range.Ptr()}
		}
	}
	return nil
}
