package run

import (
	"bufio"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"hash"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"sync/atomic"

	"axisfold/cmd/internal/report"
)

const manifestName = "manifest.json"

// folder is a run folder in the making. Files are written into a folder beside the final
// one; commit puts it in place in one step, discard leaves nothing behind. A folder is
// complete or absent.
type folder struct {
	final   string
	partial string
	made    []string // folders above, made for this run; the deepest first
	open    func(path string) (io.WriteCloser, error)
	outputs []report.File
	gone    atomic.Bool // discarded: nothing is created any more
}

// newFolder checks that final may be written or replaced, and makes the partial folder.
// runFile is the path of the run file: a folder that an earlier run of the same run file
// left may be replaced; any other run folder only with replace; what is not a run folder
// never, unless it is empty.
func newFolder(final, runFile string, replace bool) (*folder, error) {
	if err := mayReplace(final, runFile, replace); err != nil {
		return nil, err
	}
	f := &folder{final: final, open: func(path string) (io.WriteCloser, error) { return os.Create(path) }}
	parent := filepath.Dir(final)
	for dir := parent; ; dir = filepath.Dir(dir) {
		if _, err := os.Stat(dir); !errors.Is(err, fs.ErrNotExist) || dir == filepath.Dir(dir) {
			break
		}
		f.made = append(f.made, dir)
	}
	if err := os.MkdirAll(parent, 0o777); err != nil {
		return nil, &FolderError{final, problemOf(err), "name another folder with --out", false}
	}
	for attempt := 0; ; attempt++ {
		f.partial = filepath.Join(parent, fmt.Sprintf(".%s.partial-%d-%d", filepath.Base(final), os.Getpid(), attempt))
		err := os.Mkdir(f.partial, 0o777)
		if err == nil {
			return f, nil
		}
		if !errors.Is(err, fs.ErrExist) {
			return nil, &FolderError{final, problemOf(err), "name another folder with --out", false}
		}
	}
}

// FolderError says why a run folder cannot be written.
type FolderError struct {
	Path, Problem, Hint string
	// Broken: the folder was fine to write to, but writing failed, on a full disk say.
	Broken bool
}

func (e *FolderError) Error() string { return e.Path + ": " + e.Problem }

// HintText is what would mend it.
func (e *FolderError) HintText() string { return e.Hint }

func problemOf(err error) string {
	var path *fs.PathError
	if errors.As(err, &path) {
		return path.Err.Error()
	}
	return err.Error()
}

func mayReplace(final, runFile string, replace bool) error {
	info, err := os.Stat(final)
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return &FolderError{final, problemOf(err), "", false}
	}
	if !info.IsDir() {
		return &FolderError{final, "exists and is not a folder", "name another folder with --out", false}
	}
	entries, err := os.ReadDir(final)
	if err != nil {
		return &FolderError{final, problemOf(err), "", false}
	}
	if len(entries) == 0 {
		return nil
	}
	m, err := readManifest(final)
	if err != nil {
		return &FolderError{final, "exists and is not a run folder", "name another folder with --out; this one stays as it is", false}
	}
	if extra := strangers(final, m); extra != "" && !replace {
		return &FolderError{final, fmt.Sprintf("holds %q, which no run wrote", extra), "move it, name another folder with --out, or give --replace to lose it", false}
	}
	if m.RunFile.Path != relativeTo(final, runFile) && !replace {
		return &FolderError{final, fmt.Sprintf("was written by another run file, %q", m.RunFile.Path), "name another folder with --out, or give --replace", false}
	}
	return nil
}

func readManifest(dir string) (*report.Manifest, error) {
	b, err := os.ReadFile(filepath.Join(dir, manifestName))
	if err != nil {
		return nil, err
	}
	var m report.Manifest
	if err := json.Unmarshal(b, &m); err != nil {
		return nil, err
	}
	if m.Axisfold == 0 {
		return nil, errors.New("not a manifest")
	}
	return &m, nil
}

// strangers returns the first file in dir that the manifest does not list, empty without.
func strangers(dir string, m *report.Manifest) string {
	known := []string{manifestName}
	for _, f := range m.Outputs {
		known = append(known, f.Path)
	}
	found := ""
	filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		rel, _ := filepath.Rel(dir, path)
		if rel = filepath.ToSlash(rel); !slices.Contains(known, rel) {
			found = rel
			return fs.SkipAll
		}
		return nil
	})
	return found
}

// relativeTo returns path as seen from dir, with slashes; whole when there is no way.
func relativeTo(dir, path string) string {
	a, err1 := filepath.Abs(dir)
	b, err2 := filepath.Abs(path)
	if err1 == nil && err2 == nil {
		if rel, err := filepath.Rel(a, b); err == nil {
			return filepath.ToSlash(rel)
		}
	}
	return filepath.ToSlash(path)
}

// output is a file of the run folder being written; it is hashed and counted on the way.
type output struct {
	*bufio.Writer
	file io.WriteCloser
	sum  hash.Hash
	to   *folder
	name string
	size int64
}

// tee sits below the buffer of an output, so that every byte passes it once.
type tee struct{ o *output }

func (t tee) Write(b []byte) (int, error) {
	t.o.sum.Write(b)
	t.o.size += int64(len(b))
	return t.o.file.Write(b)
}

// create opens a file of the folder; name uses slashes.
func (f *folder) create(name string) (*output, error) {
	if f.gone.Load() {
		return nil, f.writeError(name, fs.ErrClosed)
	}
	path := filepath.Join(f.partial, filepath.FromSlash(name))
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		return nil, f.writeError(name, err)
	}
	file, err := f.open(path)
	if err != nil {
		return nil, f.writeError(name, err)
	}
	o := &output{file: file, sum: sha256.New(), to: f, name: name}
	o.Writer = bufio.NewWriterSize(tee{o}, 1<<20)
	return o, nil
}

// scratch is a path for what only this run needs; it goes before the folder is put in its
// place.
func (f *folder) scratch(name string) string { return filepath.Join(f.partial, "."+name) }

// Close writes what is left and enters the file into the list of outputs.
func (o *output) Close() error {
	err := o.Flush()
	if e := o.file.Close(); err == nil {
		err = e
	}
	if err != nil {
		return o.to.writeError(o.name, err)
	}
	o.to.outputs = append(o.to.outputs, report.File{Path: o.name, SHA256: hex.EncodeToString(o.sum.Sum(nil)), Bytes: o.size})
	return nil
}

func (f *folder) writeError(name string, err error) error {
	return &FolderError{filepath.Join(f.final, filepath.FromSlash(name)), "writing: " + problemOf(err), "nothing was kept of this run", true}
}

// write makes one file from what fill writes.
func (f *folder) write(name string, fill func(io.Writer) error) error {
	o, err := f.create(name)
	if err != nil {
		return err
	}
	if err := fill(o); err != nil {
		o.file.Close()
		return f.writeError(name, err)
	}
	return o.Close()
}

// commit puts the folder in its place. An older one is moved aside first and removed only
// once the new one stands.
func (f *folder) commit() error {
	old := ""
	if _, err := os.Lstat(f.final); err == nil {
		old = f.partial + "-old"
		if err := os.Rename(f.final, old); err != nil {
			return &FolderError{f.final, "moving the earlier folder aside: " + problemOf(err), "", false}
		}
	}
	if err := os.Rename(f.partial, f.final); err != nil {
		if old != "" {
			os.Rename(old, f.final)
		}
		return &FolderError{f.final, problemOf(err), "", false}
	}
	if old != "" {
		return os.RemoveAll(old)
	}
	return nil
}

// discard removes what was written, and the folders made above it; after commit it finds
// nothing to remove.
func (f *folder) discard() {
	f.gone.Store(true)
	os.RemoveAll(f.partial)
	for _, dir := range f.made {
		if os.Remove(dir) != nil {
			return // not empty: it holds the finished folder, or something of others
		}
	}
}
