package table

import (
	"bytes"
	"context"
	"database/sql"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"net/url"
	"os"
	"path/filepath"
	"strings"
	"time"

	_ "modernc.org/sqlite" // the driver
)

var sqliteMagic = []byte("SQLite format 3\x00")

// sqliteFile is a database in one file.
type sqliteFile struct {
	file, query string
	*Options
}

// openSQLite opens the result of read.query, or the only table.
func openSQLite(ctx context.Context, s *setting, file string) (part, error) {
	first, err := firstBytes(s.open, file)
	if err != nil {
		return nil, err
	}
	if !bytes.HasPrefix(first, sqliteMagic) {
		return nil, &Error{Kind: BadContent, File: file, Problem: "does not begin as an SQLite database does", Hint: "is it another format, or compressed?"}
	}
	if err := wholeDatabase(s.open, file); err != nil {
		return nil, err
	}
	f := &sqliteFile{file: file, query: s.options.Query, Options: s.options}
	ordered := true
	if f.query == "" {
		if f.query, err = f.onlyTable(ctx); err != nil {
			return nil, err
		}
	} else if ordered, err = checkQuery(f.query); err != nil {
		return nil, err
	}
	g := &grid{checked: true, open: f.start}
	r, err := f.start(ctx)
	if err != nil {
		return nil, err
	}
	names, err := r.(*sqliteRows).rows.Columns()
	r.Close()
	if err != nil {
		return nil, f.fault(err)
	}
	if g.h, err = queryHead(s.options, file, names); err != nil {
		return nil, err
	}
	g.h.unordered = !ordered
	return g, g.sample(ctx)
}

// wholeDatabase compares the size of the file with the number of pages in its header
// (www.sqlite.org/fileformat.html, 1.3): the database itself takes what is cut off a page
// for zeros.
func wholeDatabase(open opener, file string) error {
	r, err := open(file)
	if err != nil {
		return pathError(file, err)
	}
	defer r.Close()
	header := make([]byte, 100)
	if _, err := io.ReadFull(r, header); err != nil {
		return &Error{Kind: BadContent, File: file, Problem: "ends within the header of its database", Hint: "the copy is incomplete"}
	}
	info, err := os.Stat(file)
	if err != nil {
		return pathError(file, err)
	}
	page := int64(binary.BigEndian.Uint16(header[16:]))
	if page == 1 {
		page = 65536
	}
	pages := int64(binary.BigEndian.Uint32(header[28:]))
	current := bytes.Equal(header[24:28], header[92:96]) // else an old program left the number behind
	if current && info.Size() < page*pages {
		return &Error{Kind: BadContent, File: file, Problem: fmt.Sprintf("is %d bytes long, its header says %d", info.Size(), page*pages), Hint: "the copy is incomplete"}
	}
	return nil
}

// connect opens the file for reading only; nothing in it can write or load code.
func (f *sqliteFile) connect() (*sql.DB, error) {
	path, err := filepath.Abs(f.file)
	if err != nil {
		return nil, f.fault(err)
	}
	at := url.URL{Scheme: "file", Path: filepath.ToSlash(path),
		RawQuery: "mode=ro&_defensive=1&_dqs=0&_pragma=trusted_schema(0)&_pragma=query_only(1)&_pragma=cell_size_check(1)"}
	db, err := sql.Open("sqlite", at.String())
	if err != nil {
		return nil, f.fault(err)
	}
	return db, nil
}

// onlyTable is the query for all of the only table; several are an error that lists them.
func (f *sqliteFile) onlyTable(ctx context.Context) (string, error) {
	db, err := f.connect()
	if err != nil {
		return "", err
	}
	defer db.Close()
	rows, err := db.QueryContext(ctx, `select name, sql from sqlite_schema where type = 'table' and name not like 'sqlite\_%' escape '\' order by name`)
	if err != nil {
		return "", f.fault(err)
	}
	defer rows.Close()
	var names []string
	var made sql.NullString
	for rows.Next() {
		var name string
		if err := rows.Scan(&name, &made); err != nil {
			return "", f.fault(err)
		}
		names = append(names, name)
	}
	if err := rows.Err(); err != nil {
		return "", f.fault(err)
	}
	switch len(names) {
	case 0:
		return "", &Error{Kind: BadContent, File: f.file, Problem: "holds no table"}
	case 1:
	default:
		more := ""
		if n := len(names); n > 12 {
			names, more = names[:12], fmt.Sprintf(", ... (%d in all)", n)
		}
		return "", &Error{Kind: WrongInput, File: f.file, Problem: fmt.Sprintf("holds several tables: %s%s", strings.Join(names, ", "), more),
			Hint: fmt.Sprintf("set read.query, for example: select * from %s order by rowid", quotedName(names[0]))}
	}
	query := "select * from " + quotedName(names[0])
	// A table without row numbers comes in the order of its key.
	if words, _ := queryWords(made.String[strings.LastIndexByte(made.String, ')')+1:]); !strings.Contains(strings.Join(words, " "), "without rowid") {
		query += " order by rowid"
	}
	return query, nil
}

func quotedName(name string) string { return `"` + strings.ReplaceAll(name, `"`, `""`) + `"` }

func (f *sqliteFile) start(ctx context.Context) (rowReading, error) {
	db, err := f.connect()
	if err != nil {
		return nil, err
	}
	rows, err := db.QueryContext(ctx, f.query)
	if err != nil {
		db.Close()
		return nil, f.fault(err)
	}
	return &sqliteRows{of: f, db: db, rows: rows}, nil
}

// fault words an error of the database.
func (f *sqliteFile) fault(err error) error {
	if errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return err
	}
	e := &Error{Kind: BadContent, File: f.file, Problem: err.Error()}
	if f.Query != "" {
		e.Hint = "see read.query"
	}
	return e
}

// sqliteRows is a pass over a result.
type sqliteRows struct {
	of     *sqliteFile
	db     *sql.DB
	rows   *sql.Rows
	line   int
	values []any
	into   []any
}

func (r *sqliteRows) next(to *cells) error {
	if !r.rows.Next() {
		if err := r.rows.Err(); err != nil {
			e := r.of.fault(err)
			var own *Error
			if errors.As(e, &own) {
				own.Line, own.counted, own.absolute = r.line+1, "row", true
			}
			return e
		}
		return io.EOF
	}
	if r.values == nil {
		r.values = make([]any, to.width)
		for i := range r.values {
			r.into = append(r.into, &r.values[i])
		}
	}
	if err := r.rows.Scan(r.into...); err != nil {
		return r.of.fault(err)
	}
	r.line++
	to.addRow(r.line)
	for j, v := range r.values {
		switch v := v.(type) {
		case nil:
		case int64:
			to.setWhole(j, v)
		case float64:
			to.setNumber(j, v)
		case bool:
			to.setTruth(j, v)
		case string:
			to.setText(j, textCell, []byte(v))
		case time.Time:
			to.setText(j, timeCell, v.AppendFormat(nil, time.RFC3339Nano))
		default:
			to.at(j).kind = bytesCell
		}
	}
	return nil
}

func (r *sqliteRows) Close() error {
	err := r.rows.Close()
	if other := r.db.Close(); err == nil {
		err = other
	}
	if err != nil {
		return r.of.fault(err)
	}
	return nil
}
