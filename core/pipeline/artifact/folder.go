package artifact

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"hushframe/core/pipeline/fault"
)

// ManifestName is the file that makes a folder an artifact.
const ManifestName = "artifact.json"

// looseFolder holds the loose files, so that none can pose as a table.
const looseFolder = "files"

// Manifest is artifact.json. Writers in other languages may leave out Hash
// and the sums of the entries; the host fills them in when it takes over the
// artifact.
type Manifest struct {
	Kind    string                    `json:"kind"`
	Version int                       `json:"version"`
	Hash    string                    `json:"hash,omitempty"` // content hash, hex
	Scalars map[string]ManifestScalar `json:"scalars,omitempty"`
	Tables  map[string]Entry          `json:"tables,omitempty"` // NAME.arrow beside the manifest
	Files   map[string]Entry          `json:"files,omitempty"`  // below the folder "files"
}

// ManifestScalar is a scalar with its unit. Value is a JSON number, text or
// truth; a float that JSON cannot say is the text "nan", "inf" or "-inf".
type ManifestScalar struct {
	Value json.RawMessage `json:"value"`
	Unit  string          `json:"unit,omitempty"`
}

// Entry is one file of the artifact.
type Entry struct {
	Rows   int    `json:"rows,omitempty"` // tables only
	Size   int64  `json:"size,omitempty"` // bytes
	SHA256 string `json:"sha256,omitempty"`
}

// Write checks an artifact and writes it to an existing empty folder. It
// returns the content hash. Equal artifacts give equal bytes.
func Write(folder string, a *Artifact) (string, error) { return write(folder, a, true) }

// WriteUnsealed writes an artifact without hash and checksums, for a reader
// that reads it at once.
func WriteUnsealed(folder string, a *Artifact) error {
	_, err := write(folder, a, false)
	return err
}

func write(folder string, a *Artifact, sealed bool) (string, error) {
	if err := a.Check(); err != nil {
		return "", fault.New(fault.Internal, "%v", err).In("write artifact", a.Kind.Name)
	}
	m, entryOf := a.manifest(), entryOf
	if sealed {
		m.Hash = a.Hash()
	} else {
		entryOf = func(data []byte) Entry { return Entry{Size: int64(len(data))} }
	}
	for _, spec := range a.Kind.Tables {
		t := a.Tables[spec.Name]
		data, err := EncodeTable(t)
		if err != nil {
			return "", fault.New(fault.Internal, "%v", err).In("write artifact", a.Kind.Name)
		}
		if err := os.WriteFile(filepath.Join(folder, spec.Name+".arrow"), data, 0o644); err != nil {
			return "", writeFault(a.Kind, err)
		}
		e := entryOf(data)
		e.Rows = t.Rows()
		m.Tables[spec.Name] = e
	}
	for _, path := range sortedKeys(a.Files) {
		if !validLoose(path) {
			return "", fault.New(fault.Internal, "%q is no usable relative path", path).In("write artifact", a.Kind.Name)
		}
		place := filepath.Join(folder, looseFolder, filepath.FromSlash(path))
		err := os.MkdirAll(filepath.Dir(place), 0o755)
		if err == nil {
			err = os.WriteFile(place, a.Files[path], 0o644)
		}
		if err != nil {
			return "", writeFault(a.Kind, err)
		}
		m.Files[path] = entryOf(a.Files[path])
	}
	return m.Hash, m.write(folder)
}

// Seal completes the manifest of an artifact that Open read from a folder, with
// the content hash and the size and checksum of every file, where its writer
// left them out. It fails when the folder holds files that are no part of it.
func Seal(folder string, a *Artifact) (string, error) {
	m, err := ReadManifest(folder)
	if err != nil {
		return "", err
	}
	whole := m.Hash != ""
	err = filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		rel, err := filepath.Rel(folder, path)
		if err != nil {
			return err
		}
		rel = filepath.ToSlash(rel)
		entries, name := m.Tables, strings.TrimSuffix(rel, ".arrow")
		if loose, ok := strings.CutPrefix(rel, looseFolder+"/"); ok {
			entries, name = m.Files, loose
		} else if rel == ManifestName {
			return nil
		} else if name == rel {
			return fmt.Errorf("the file %s is no part of the artifact", rel)
		}
		e, ok := entries[name]
		if !ok {
			return fmt.Errorf("the file %s is no part of the artifact", rel)
		}
		if e.SHA256 != "" && (e.Size != 0 || len(a.Files[name]) == 0) {
			return nil // Open has compared it
		}
		data, err := os.ReadFile(path)
		if err != nil {
			return err
		}
		whole = false
		e = entryOf(data)
		if t := a.Tables[name]; t != nil && name != rel {
			e.Rows = t.Rows()
		}
		entries[name] = e
		return nil
	})
	if err != nil {
		return "", fault.New(fault.Protocol, "%v", err).In("seal artifact", a.Kind.Name)
	}
	if whole {
		return m.Hash, nil
	}
	m.Hash = a.Hash()
	return m.Hash, m.write(folder)
}

// manifest gives the manifest without hash and the entries of files.
func (a *Artifact) manifest() *Manifest {
	m := &Manifest{Kind: a.Kind.Name, Version: a.Kind.Version,
		Scalars: map[string]ManifestScalar{}, Tables: map[string]Entry{}, Files: map[string]Entry{}}
	for _, s := range a.Kind.Scalars {
		m.Scalars[s.Name] = ManifestScalar{Value: encodeScalar(a.Scalars[s.Name]), Unit: s.Unit}
	}
	return m
}

func (m *Manifest) write(folder string) error {
	if err := os.WriteFile(filepath.Join(folder, ManifestName), m.encode(), 0o644); err != nil {
		return fault.New(fault.Limit, "%v", err).In("write artifact", m.Kind)
	}
	return nil
}

func writeFault(k Kind, err error) error {
	return fault.New(fault.Limit, "%v", err).In("write artifact", k.Name)
}

func entryOf(data []byte) Entry {
	sum := sha256.Sum256(data)
	return Entry{Size: int64(len(data)), SHA256: hex.EncodeToString(sum[:])}
}

func (m *Manifest) encode() []byte {
	data, err := json.MarshalIndent(m, "", "  ")
	if err != nil {
		panic("artifact: " + err.Error()) // texts, numbers and valid raw values only
	}
	return append(data, '\n')
}

// Open reads and checks an artifact whose kind is in the registry. Whatever
// the folder holds, the answer is an artifact or a fault of kind Protocol
// (Missing when there is no artifact at all).
//
// Tables, columns and scalars that the kind does not know are left out: a later
// version of the program may have added them, and an extension built before
// goes on reading. OpenExact does not allow them.
//
// Files are read whole and the columns share that memory. They are not mapped:
// a mapped file that another process cuts short kills this one.
func Open(folder string, registry Registry) (*Artifact, error) { return open(folder, registry, false) }

// OpenExact is Open for what is to be kept: nothing may be there that the kind
// does not know.
func OpenExact(folder string, registry Registry) (*Artifact, error) {
	return open(folder, registry, true)
}

func open(folder string, registry Registry, exact bool) (*Artifact, error) {
	m, err := ReadManifest(folder)
	if err != nil {
		return nil, err
	}
	a, err := m.load(folder, registry, exact)
	if err != nil {
		return nil, fault.New(fault.Protocol, "%v", err).In("read artifact", folder)
	}
	return a, nil
}

// ReadManifest reads artifact.json alone.
func ReadManifest(folder string) (*Manifest, error) {
	data, err := os.ReadFile(filepath.Join(folder, ManifestName))
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fault.New(fault.Missing, "there is no %s", ManifestName).In("read artifact", folder)
	}
	if err != nil {
		return nil, fault.New(fault.Protocol, "%v", err).In("read artifact", folder)
	}
	m := &Manifest{}
	d := json.NewDecoder(bytes.NewReader(data))
	d.DisallowUnknownFields()
	if err := d.Decode(m); err != nil {
		return nil, fault.New(fault.Protocol, "%s cannot be understood (%v)", ManifestName, err).In("read artifact", folder)
	}
	return m, nil
}

func (m *Manifest) load(folder string, registry Registry, exact bool) (*Artifact, error) {
	kind, ok := registry[m.Kind]
	if !ok {
		return nil, fmt.Errorf("the artifact kind %q is not known", m.Kind)
	}
	if m.Version != kind.Version {
		return nil, fmt.Errorf("%s is of version %d, this program reads version %d", kind.Name, m.Version, kind.Version)
	}
	a, more := New(kind), false // more tells that something was left out
	for _, name := range sortedKeys(m.Scalars) {
		if !exact && !slices.ContainsFunc(kind.Scalars, func(c Column) bool { return c.Name == name }) {
			more = true
			continue
		}
		v, err := decodeScalar(kind, name, m.Scalars[name])
		if err != nil {
			return nil, err
		}
		a.Scalars[name] = v
	}
	for _, name := range sortedKeys(m.Tables) {
		if _, ok := a.Tables[name]; !ok && !exact {
			more = true
		} else if !ok {
			return nil, fmt.Errorf("%s: table %s is not part of the kind", kind.Name, name)
		}
	}
	for _, spec := range kind.Tables {
		e, ok := m.Tables[spec.Name]
		if !ok {
			return nil, fmt.Errorf("%s: table %s is missing", kind.Name, spec.Name)
		}
		data, err := readEntry(filepath.Join(folder, spec.Name+".arrow"), e)
		if err != nil {
			return nil, fmt.Errorf("%s: table %s: %w", kind.Name, spec.Name, err)
		}
		t, left, err := decodeTable(spec, data, exact)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", kind.Name, err)
		}
		more = more || left
		a.Tables[spec.Name] = t
	}
	for _, path := range sortedKeys(m.Files) {
		if !validLoose(path) {
			return nil, fmt.Errorf("%s: %q is no usable relative path", kind.Name, path)
		}
		data, err := readEntry(filepath.Join(folder, looseFolder, filepath.FromSlash(path)), m.Files[path])
		if err != nil {
			return nil, fmt.Errorf("%s: file %s: %w", kind.Name, path, err)
		}
		a.Files[path] = data
	}
	if err := a.Check(); err != nil {
		return nil, err
	}
	if m.Hash != "" && !more && m.Hash != a.Hash() { // of what is left out only the checksums of files speak
		return nil, fmt.Errorf("%s: the content does not match its hash", kind.Name)
	}
	return a, nil
}

// readEntry reads one file and compares it with what the manifest says of it.
func readEntry(path string, e Entry) ([]byte, error) {
	if err := regular(path, e); err != nil {
		return nil, err
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	if e.SHA256 != "" && entryOf(data).SHA256 != e.SHA256 {
		return nil, fmt.Errorf("the content of %s does not match its checksum", filepath.Base(path))
	}
	return data, nil
}

func regular(path string, e Entry) error {
	info, err := os.Lstat(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("the file %s is missing", filepath.Base(path))
	case err != nil:
		return err
	case !info.Mode().IsRegular():
		return fmt.Errorf("%s is no regular file", filepath.Base(path))
	case e.Size != 0 && info.Size() != e.Size:
		return fmt.Errorf("%s has %d bytes, its artifact says %d", filepath.Base(path), info.Size(), e.Size)
	}
	return nil
}

// Present is the cheap check of an artifact that was complete once: manifest
// readable, hash as expected, every file there with its size.
func Present(folder, hash string) error {
	m, err := ReadManifest(folder)
	if err != nil {
		return err
	}
	bad := fault.New(fault.Protocol, "").In("read artifact", folder)
	if m.Hash != hash {
		bad.Text = "the manifest names another hash"
		return bad
	}
	for name, e := range m.Tables {
		if err := regular(filepath.Join(folder, name+".arrow"), e); err != nil {
			bad.Text = err.Error()
			return bad
		}
	}
	for path, e := range m.Files {
		if err := regular(filepath.Join(folder, looseFolder, filepath.FromSlash(path)), e); err != nil {
			bad.Text = err.Error()
			return bad
		}
	}
	return nil
}

// validLoose accepts slash-separated relative paths that mean the same on
// every system and cannot leave the folder.
func validLoose(path string) bool {
	return fs.ValidPath(path) && path != "." && filepath.IsLocal(filepath.FromSlash(path)) &&
		!strings.ContainsAny(path, "\\:*?\"<>|\x00")
}

func encodeScalar(v any) json.RawMessage {
	if x, ok := v.(float64); ok {
		switch {
		case math.IsNaN(x):
			return json.RawMessage(`"nan"`)
		case math.IsInf(x, 1):
			return json.RawMessage(`"inf"`)
		case math.IsInf(x, -1):
			return json.RawMessage(`"-inf"`)
		}
	}
	data, _ := json.Marshal(v) // a finite number, text or truth cannot fail
	return data
}

func decodeScalar(kind Kind, name string, s ManifestScalar) (any, error) {
	for _, c := range kind.Scalars {
		if c.Name != name {
			continue
		}
		if s.Unit != c.Unit {
			return nil, fmt.Errorf("%s: scalar %s has the unit %q, where the kind wants %q", kind.Name, name, s.Unit, c.Unit)
		}
		v, err := scalarValue(c.Type, s.Value)
		if err != nil {
			return nil, fmt.Errorf("%s: scalar %s is %s, where the kind wants %s", kind.Name, name, s.Value, c.Type)
		}
		return v, nil
	}
	return nil, fmt.Errorf("%s: scalar %s is not part of the kind", kind.Name, name)
}

func scalarValue(t ColumnType, raw json.RawMessage) (any, error) {
	switch t {
	case Float:
		switch string(raw) {
		case `"nan"`:
			return math.NaN(), nil
		case `"inf"`:
			return math.Inf(1), nil
		case `"-inf"`:
			return math.Inf(-1), nil
		}
		return strconv.ParseFloat(string(raw), 64)
	case Int:
		return strconv.ParseInt(string(raw), 10, 64)
	case Text:
		var s *string
		if err := json.Unmarshal(raw, &s); err != nil {
			return nil, err
		} else if s == nil {
			return nil, errors.New("null")
		}
		return *s, nil
	case Truth:
		switch string(raw) {
		case "true":
			return true, nil
		case "false":
			return false, nil
		}
		return nil, errors.New("neither true nor false")
	}
	return nil, fmt.Errorf("%q is no scalar type", t)
}
