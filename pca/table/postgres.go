package table

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"strconv"
	"strings"
	"time"

	"github.com/jackc/pgx/v5/pgconn"
)

// postgresName is what errors call the server: the connection string is a secret.
const postgresName = "postgres"

// Bounds of a server's answers.
const (
	connectTimeout  = 30 * time.Second
	longestResponse = 256 << 20 // of one row
)

// postgres is a query that a server answers. Every pass is a transaction that reads only,
// on a connection of its own, and sees one state of the data.
type postgres struct {
	query, connection string
	types             []uint32
}

// openPostgres asks the server what the query's columns are.
func openPostgres(ctx context.Context, s *setting, _ string) (part, error) {
	ordered, err := checkQuery(s.options.Query)
	if err != nil {
		return nil, err
	}
	p := &postgres{query: s.options.Query, connection: s.options.Connection}
	conn, err := p.connect(ctx)
	if err != nil {
		return nil, err
	}
	defer hangUp(conn)
	d, err := conn.Prepare(ctx, "", p.query, nil)
	if err != nil {
		return nil, p.fault(ctx, err, 0)
	}
	var names []string
	for _, f := range d.Fields {
		names = append(names, f.Name)
		p.types = append(p.types, f.DataTypeOID)
	}
	g := &grid{checked: true, open: p.start}
	if g.h, err = queryHead(s.options, postgresName, names); err != nil {
		return nil, err
	}
	for j, t := range p.types {
		g.h.sample[j] = declaredSample(t)
	}
	g.h.unordered = !ordered
	return g, nil
}

// connect opens a connection with settings that make values readable in one way.
func (p *postgres) connect(ctx context.Context) (*pgconn.PgConn, error) {
	text, hint := "", "see the environment variables PGHOST, PGPORT, PGUSER, PGPASSWORD, PGDATABASE"
	if p.connection != "" {
		text = os.Getenv(p.connection)
		hint = "see the environment variable " + p.connection
		if text == "" {
			return nil, &Error{Kind: WrongInput, Problem: fmt.Sprintf("read.connection: the environment variable %q is not set", p.connection),
				Hint: "it holds the connection string, such as postgres://user@host/database"}
		}
	}
	config, err := pgconn.ParseConfig(text)
	if err != nil {
		// The driver's words quote the string, which may hold a password.
		return nil, &Error{Kind: WrongInput, File: postgresName, Problem: "the connection string cannot be read", Hint: hint}
	}
	if config.ConnectTimeout == 0 {
		config.ConnectTimeout = connectTimeout
	}
	config.MaxProtocolMessageBodyLen = longestResponse
	for key, value := range map[string]string{"application_name": "axisfold", "datestyle": "ISO", "timezone": "UTC", "extra_float_digits": "3", "client_encoding": "UTF8"} {
		for other := range config.RuntimeParams {
			if strings.EqualFold(other, key) { // of PGTZ or the connection string
				delete(config.RuntimeParams, other)
			}
		}
		config.RuntimeParams[key] = value
	}
	conn, err := pgconn.ConnectConfig(ctx, config)
	if err != nil {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		problem := err.Error()
		var refused *pgconn.PgError
		var failed *pgconn.ConnectError
		switch {
		case errors.As(err, &refused):
			problem = refused.Message
		case errors.As(err, &failed):
			problem = strings.ReplaceAll(failed.Unwrap().Error(), "\n", "; ")
		}
		if config.Password != "" {
			problem = strings.ReplaceAll(problem, config.Password, "***")
		}
		return nil, &Error{Kind: WrongInput, File: postgresName, Problem: "cannot connect: " + problem, Hint: hint}
	}
	return conn, nil
}

// hangUp ends a connection without waiting long for a server that is gone.
func hangUp(conn *pgconn.PgConn) {
	ctx, cancel := context.WithTimeout(context.Background(), 3*time.Second)
	defer cancel()
	_ = conn.Close(ctx) // what was read is already judged
}

// fault words what went wrong after so many rows.
func (p *postgres) fault(ctx context.Context, err error, rows int) error {
	if ctx.Err() != nil {
		return ctx.Err()
	}
	e := &Error{Kind: BadContent, File: postgresName, counted: "row", absolute: true}
	if rows > 0 {
		e.Line = rows + 1
	}
	var said *pgconn.PgError
	if !errors.As(err, &said) {
		e.Problem, e.Hint = "the connection was lost: "+err.Error(), "run again; nothing of this reading was kept"
		return e
	}
	e.Problem, e.Hint = said.Message, said.Hint
	if said.Position > 0 {
		e.Problem += fmt.Sprintf(" (at character %d of read.query)", said.Position)
	}
	return e
}

func (p *postgres) start(ctx context.Context) (rowReading, error) {
	conn, err := p.connect(ctx)
	if err != nil {
		return nil, err
	}
	if err := conn.Exec(ctx, "begin isolation level repeatable read read only").Close(); err != nil {
		hangUp(conn)
		return nil, p.fault(ctx, err, 0)
	}
	return &postgresRows{of: p, ctx: ctx, conn: conn, rows: conn.ExecParams(ctx, p.query, nil, nil, nil, nil)}, nil
}

// postgresRows is a pass over the answer, whose values come as text.
type postgresRows struct {
	of   *postgres
	ctx  context.Context
	conn *pgconn.PgConn
	rows *pgconn.ResultReader
	line int
}

func (r *postgresRows) next(to *cells) error {
	if !r.rows.NextRow() {
		if _, err := r.rows.Close(); err != nil {
			return r.of.fault(r.ctx, err, r.line)
		}
		return io.EOF
	}
	values := r.rows.Values()
	if len(values) != to.width || len(values) != len(r.of.types) {
		return &Error{Kind: BadContent, File: postgresName, Problem: fmt.Sprintf("gave %d columns, before it were %d", len(values), to.width)}
	}
	r.line++
	to.addRow(r.line)
	for j, v := range values {
		if v == nil {
			continue
		}
		if !setPostgres(to, j, r.of.types[j], v) {
			return &Error{Kind: BadContent, File: postgresName, Line: r.line, counted: "row", absolute: true, Column: j + 1,
				Problem: fmt.Sprintf("%q is not a number", shorten(string(v), 40))}
		}
	}
	return nil
}

func (r *postgresRows) Close() error {
	hangUp(r.conn)
	return nil
}

// Types by the numbers that the server's catalog pg_type fixes.
const (
	postgresBool        = 16
	postgresBytes       = 17
	postgresInt8        = 20
	postgresInt2        = 21
	postgresInt4        = 23
	postgresOID         = 26
	postgresFloat4      = 700
	postgresFloat8      = 701
	postgresDate        = 1082
	postgresTimestamp   = 1114
	postgresTimestampTZ = 1184
	postgresNumeric     = 1700
)

// declaredSample says what a column of a type is.
func declaredSample(t uint32) sampleColumn {
	switch t {
	case postgresBool:
		return sampleColumn{filled: 1, numbers: 1, truths: 1}
	case postgresInt8, postgresInt2, postgresInt4, postgresOID, postgresFloat4, postgresFloat8, postgresNumeric:
		return sampleColumn{filled: 1, numbers: 1}
	case postgresDate, postgresTimestamp, postgresTimestampTZ:
		return sampleColumn{declared: "times"}
	case postgresBytes:
		return sampleColumn{declared: "bytes"}
	case 18, 19, 25, 1042, 1043: // char, name, text, character, character varying
		return sampleColumn{declared: "text"}
	}
	return sampleColumn{declared: "values that are not numbers"}
}

// setPostgres sets a cell from the text of a value.
func setPostgres(to *cells, j int, t uint32, text []byte) bool {
	switch t {
	case postgresBool:
		to.setTruth(j, string(text) == "t")
	case postgresInt8, postgresInt2, postgresInt4, postgresOID:
		v, err := strconv.ParseInt(string(text), 10, 64)
		to.setWhole(j, v)
		return err == nil
	case postgresFloat4, postgresFloat8, postgresNumeric:
		switch string(text) {
		case "NaN":
			to.setNumber(j, math.NaN())
			return true
		case "Infinity", "-Infinity":
			to.setNumber(j, math.Inf(1))
			if text[0] == '-' {
				to.setNumber(j, math.Inf(-1))
			}
			return true
		}
		bits := 64
		if t == postgresFloat4 {
			bits = 32 // the value that is stored, as in other formats, not its short text
		}
		v, err := strconv.ParseFloat(string(text), bits)
		to.setNumber(j, v) // infinite where the number is too large, which is then an error
		return err == nil || errors.Is(err, strconv.ErrRange)
	case postgresDate, postgresTimestamp, postgresTimestampTZ:
		at := len(to.text)
		to.setText(j, timeCell, text)
		written := to.text[at:]
		if i := bytes.IndexByte(written, ' '); i >= 0 && !bytes.HasSuffix(written, []byte(" BC")) {
			written[i] = 'T'
		}
		if bytes.HasSuffix(written, []byte("+00")) {
			to.text = append(to.text[:len(to.text)-3], 'Z')
			to.at(j).text.to = int32(len(to.text))
		}
	case postgresBytes:
		to.at(j).kind = bytesCell
	default:
		to.setText(j, textCell, text)
	}
	return true
}
