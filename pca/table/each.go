package table

import (
	"bytes"
	"context"
	"crypto/sha256"
	"errors"
	"fmt"
	"io"
	"runtime"
	"sync"
)

// Each goes through the rows of all files; see Rows. One goroutine reads, threads parse
// and work, the caller's merges.
func (t *Table) Each(ctx context.Context, threads int, work func(worker int, b *Block) error, merge func(b *Block) error) error {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	for i, f := range t.files {
		if err := checkUnchanged(f, t.before[i]); err != nil {
			return err
		}
	}
	counted := t.starts != nil
	var starts []int64
	p := &parser{columns: t.columns, time: t.options.Time != "", group: t.options.Groups != ""}
	row, blank, short := int64(0), int64(0), int64(0)
	line, file := 1, ""
	remarks, digest := map[remark]int64{}, sha256.New()
	err := inOrder(ctx, threads, t.pieceReader(ctx), func(worker int, b *Block) error {
		// A file that grows meanwhile is found out at the end of the pass.
		if counted && b.Index < len(t.starts) {
			b.Row = t.starts[b.Index]
		}
		if err := b.pieces.parse(p, b); err != nil {
			return err
		}
		return work(worker, b)
	}, func(b *Block) error {
		if b.file != file {
			file, line = b.file, 1
		}
		b.line = line
		b.Row = row
		if b.err != nil {
			return b.placed(b.err)
		}
		starts = append(starts, row)
		row += int64(b.Count)
		line += b.newBy
		blank += int64(b.blank)
		short += int64(b.short)
		for r, n := range b.remarks {
			remarks[r] += n
		}
		digest.Write(b.digest)
		return b.placed(merge(b))
	})
	if err != nil {
		return err
	}
	for i, f := range t.files {
		if err := checkUnchanged(f, t.before[i]); err != nil {
			return err
		}
	}
	if row == 0 {
		return &Error{Kind: BadContent, File: t.parts[0].head().file, Problem: "has a header but no rows"}
	}
	if starts == nil {
		starts = []int64{}
	}
	if err := t.checkDigest(digest.Sum(nil)); err != nil {
		return err
	}
	t.starts, t.blank, t.short, t.remarks = starts, blank, short, remarks
	return nil
}

// checkDigest compares the values of a pass with those of the pass before, where no file
// tells whether they changed.
func (t *Table) checkDigest(now []byte) error {
	if g, ok := t.parts[0].(*grid); !ok || !g.checked {
		return nil
	}
	if t.digest != nil && !bytes.Equal(t.digest, now) {
		return &Error{Kind: BadContent, File: t.parts[0].head().file, Problem: "gave other rows than the time before, or the same in another order",
			Hint: "let the query name a finished stretch of rows, and give it an order by"}
	}
	t.digest = now
	return nil
}

// placed gives an error about a row of this block its line in the file. Lines in the
// first block of a file start after the head that was read beforehand.
func (b *Block) placed(err error) error {
	var e *Error
	if errors.As(err, &e) && e.File == b.file && e.Line > 0 && !e.absolute {
		e.Line += b.line - 1
		if e.counted == "" {
			e.counted = b.counted
		}
		e.absolute = true
	}
	return err
}

// pieceReader returns a function that fills blocks with pieces of the parts, one after
// another; it returns io.EOF at the end.
func (t *Table) pieceReader(ctx context.Context) func(b *Block) error {
	t.late = nil
	next := 0 // part
	var current pieces
	index := 0
	closeCurrent := func() error {
		if current == nil {
			return nil
		}
		if g, ok := current.(interface{ late() []Note }); ok {
			t.late = append(t.late, g.late()...)
		}
		err := current.Close()
		current = nil
		return err
	}
	return func(b *Block) error {
		for {
			if b == nil { // told to stop
				return closeCurrent()
			}
			if current == nil {
				if next == len(t.parts) {
					return io.EOF
				}
				started, err := t.parts[next].start(ctx, t.layouts[next])
				next++
				if err != nil {
					return err
				}
				current = started
			}
			err := current.next(b)
			if err == io.EOF {
				if err := closeCurrent(); err != nil {
					return err
				}
				continue
			}
			if err != nil {
				return err
			}
			h := t.parts[next-1].head()
			b.pieces, b.file, b.counted = current, h.file, h.counted
			b.layout, b.names = t.layouts[next-1], t.columns
			b.Index = index
			index++
			return nil
		}
	}
}

// inOrder runs a reader, parallel workers and an ordered merge. The first error in block
// order wins, whatever finishes first.
func inOrder(ctx context.Context, threads int, read func(*Block) error, work func(int, *Block) error, merge func(*Block) error) error {
	ctx, cancel := context.WithCancel(ctx)
	flight := 2*threads + 2
	free := make(chan *Block, flight)
	for range flight {
		free <- &Block{}
	}
	jobs := make(chan *Block, flight)
	done := make(chan *Block, flight)
	var wg sync.WaitGroup
	wg.Go(func() {
		defer close(jobs)
		defer read(nil)
		for index := 0; ; index++ {
			var b *Block
			select {
			case b = <-free:
			case <-ctx.Done():
				return
			}
			err := guard(func() error { return read(b) })
			if err == io.EOF {
				return
			}
			if err != nil {
				b.Index, b.err, b.failed = index, err, true
			}
			jobs <- b // has room for all blocks there are
			if err != nil {
				return
			}
		}
	})
	for worker := range threads {
		wg.Go(func() {
			for b := range jobs {
				if !b.failed && ctx.Err() == nil {
					b.err = guard(func() error { return work(worker, b) })
				}
				done <- b
			}
		})
	}
	go func() { wg.Wait(); close(done) }()

	var first error
	waiting := map[int]*Block{}
	next := 0
	for b := range done {
		waiting[b.Index] = b
		for {
			b, ok := waiting[next]
			if !ok {
				break
			}
			delete(waiting, next)
			next++
			if first == nil {
				first = ctx.Err()
			}
			if first == nil {
				if b.failed {
					first = b.err
				} else {
					first = guard(func() error { return merge(b) })
				}
			}
			if first != nil {
				cancel()
			}
			b.Result, b.err, b.failed = nil, nil, false
			free <- b
		}
	}
	if first == nil {
		first = ctx.Err()
	}
	cancel()
	return first
}

// guard turns a panic into an error, so that no goroutine is left waiting.
func guard(f func() error) (err error) {
	defer func() {
		if r := recover(); r != nil {
			buf := make([]byte, 4096)
			buf = buf[:runtime.Stack(buf, false)]
			err = fmt.Errorf("panic: %v\n%s", r, bytes.TrimSpace(buf))
		}
	}()
	return f()
}
