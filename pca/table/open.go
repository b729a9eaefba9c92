package table

import (
	"bufio"
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"sort"
	"strings"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"
)

// expand turns paths and globs into the list of files, globs in name order.
func expand(dir string, patterns []string) ([]string, error) {
	if len(patterns) == 0 {
		return nil, &Error{Kind: WrongInput, Problem: "no files named"}
	}
	var files []string
	for _, pattern := range patterns {
		full, glob := pattern, pattern
		if !filepath.IsAbs(pattern) {
			full = filepath.Join(dir, pattern)
			// What the folder's own name holds is no pattern.
			glob = filepath.Join(globMarks.Replace(dir), pattern)
		}
		if _, err := os.Lstat(full); err == nil || !strings.ContainsAny(pattern, "*?[") {
			files = append(files, full)
			continue
		}
		matched, err := filepath.Glob(glob)
		if err != nil {
			return nil, &Error{Kind: WrongInput, File: pattern, Problem: "is not a pattern for file names", Hint: "close the [ or write the name out"}
		}
		matched = slices.DeleteFunc(matched, func(f string) bool {
			info, err := os.Stat(f)
			return err == nil && info.IsDir()
		})
		if len(matched) == 0 {
			return nil, &Error{Kind: WrongInput, File: pattern, Problem: "no file matches"}
		}
		sort.Strings(matched)
		files = append(files, matched...)
	}
	for i, f := range files {
		for _, g := range files[:i] {
			if f == g {
				return nil, &Error{Kind: WrongInput, File: f, Problem: "is named twice, so its rows would count twice"}
			}
		}
	}
	return files, nil
}

var globMarks = strings.NewReplacer(`*`, `\*`, `?`, `\?`, `[`, `\[`, `\`, `\\`)

// opener opens a file for reading; tests put others in its place.
type opener func(path string) (io.ReadCloser, error)

func openFile(path string) (io.ReadCloser, error) { return os.Open(path) }

// stream is the decompressed text of one file.
type stream struct {
	io.Reader
	closers []func() error
}

func (s *stream) Close() error {
	var first error
	for i := len(s.closers) - 1; i >= 0; i-- {
		if err := s.closers[i](); first == nil {
			first = err
		}
	}
	return first
}

// openText opens a file and undoes its compression, which the first bytes tell.
func openText(open opener, path string) (*stream, error) {
	if err := notFolder(path); err != nil {
		return nil, err
	}
	file, err := open(path)
	if err != nil {
		return nil, pathError(path, err)
	}
	s := &stream{closers: []func() error{file.Close}}
	buffered := bufio.NewReaderSize(file, 1<<16)
	magic, err := buffered.Peek(4)
	if err != nil && err != io.EOF {
		s.Close()
		return nil, readError(path, err)
	}
	switch {
	case isGzip(magic):
		z, err := gzip.NewReader(buffered)
		if err != nil {
			s.Close()
			return nil, &Error{Kind: BadContent, File: path, Problem: "the gzip data are damaged: " + err.Error()}
		}
		s.closers = append(s.closers, z.Close)
		s.Reader = z
	case isZstd(magic):
		z, err := zstd.NewReader(buffered, zstd.WithDecoderConcurrency(1), zstd.WithDecoderMaxMemory(256<<20))
		if err != nil {
			s.Close()
			return nil, &Error{Kind: BadContent, File: path, Problem: "the zstd data are damaged: " + err.Error()}
		}
		s.closers = append(s.closers, func() error { z.Close(); return nil })
		s.Reader = z
	default:
		s.Reader = buffered
	}
	return s, nil
}

func notFolder(path string) error {
	if info, err := os.Stat(path); err == nil && info.IsDir() {
		return &Error{Kind: WrongInput, File: path, Problem: "is a folder", Hint: "name the files in it, for example with *.csv"}
	}
	return nil
}

// How compressed data begin (RFC 1952, 2.3.1; RFC 8878, 3.1.1).
func isGzip(first []byte) bool { return bytes.HasPrefix(first, []byte{0x1f, 0x8b}) }

func isZstd(first []byte) bool {
	return bytes.HasPrefix(first, []byte{0x28, 0xb5, 0x2f, 0xfd}) || len(first) >= 4 && skippableFrame(first[:4])
}

// skippableFrame tells the other way for zstd data to start (RFC 8878, 3.1.2).
func skippableFrame(magic []byte) bool {
	return len(magic) == 4 && magic[0]&0xf0 == 0x50 && magic[1] == 0x2a && magic[2] == 0x4d && magic[3] == 0x18
}

// readError words an error met while reading.
func readError(path string, err error) error {
	var own *Error
	if errors.As(err, &own) {
		return err
	}
	if errors.Is(err, io.ErrUnexpectedEOF) {
		return &Error{Kind: BadContent, File: path, Problem: "ends in the middle of its compressed data", Hint: "the copy is incomplete"}
	}
	e := pathError(path, err)
	e.Kind, e.Problem = BadContent, "reading: "+e.Problem
	return e
}

// fingerprint is what must not change between passes.
type fingerprint struct {
	size     int64
	modified int64
}

func fingerprintOf(path string) (fingerprint, error) {
	info, err := os.Stat(path)
	if err != nil {
		return fingerprint{}, pathError(path, err)
	}
	if !info.Mode().IsRegular() && !info.IsDir() {
		return fingerprint{}, &Error{Kind: WrongInput, File: path, Problem: "is not a regular file, and a table is read more than once", Hint: "write it to a file first"}
	}
	return fingerprint{info.Size(), info.ModTime().UnixNano()}, nil
}

func checkUnchanged(path string, before fingerprint) error {
	now, err := fingerprintOf(path)
	if err != nil {
		return err
	}
	if now != before {
		return &Error{Kind: BadContent, File: path, Problem: fmt.Sprintf("changed while it was being read (%d bytes, now %d)", before.size, now.size),
			Hint: "run again when the file is complete"}
	}
	return nil
}
