package table

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"net"
	"net/url"
	"os"
	"slices"
	"strings"
	"sync/atomic"
	"testing"
	"time"

	"github.com/jackc/pgx/v5/pgconn"
)

// serverVariable names the variable with the connection string of a server where tests may make tables.
const serverVariable = "AXISFOLD_TEST_POSTGRES"

// server makes tables and returns the settings that reach them.
func server(t testing.TB, statements string) Options {
	t.Helper()
	address := os.Getenv(serverVariable)
	if address == "" {
		t.Skipf("no server to test with: %s is not set; .ci/run starts one", serverVariable)
	}
	conn, err := pgconn.Connect(context.Background(), address)
	if err != nil {
		t.Fatal(err)
	}
	defer conn.Close(context.Background())
	if err := conn.Exec(context.Background(), statements).Close(); err != nil {
		t.Fatal(err)
	}
	return Options{Format: "postgres", Connection: serverVariable}
}

func TestKindsOfPostgres(t *testing.T) {
	o := server(t, `set time zone 'Asia/Kolkata'; drop table if exists kinds; create table kinds (i integer primary key, flow double precision, narrow real, exact numeric(30, 10), large bigint,
		small smallint, on_off boolean, stamp timestamptz, local timestamp, day date, pump text, raw bytea, many integer[]);
		insert into kinds values (1, 0.1, 0.1, 12345678901234567890.0123456789, 9007199254740993, -3, true, '2024-02-29 13:45:30.25+01', '2024-02-29 13:45:30', '2024-02-29', 'a', 'x', '{1,2}'),
		(2, 'NaN', null, 'NaN', -9223372036854775808, null, false, null, '1999-12-31 23:59:59.123456', '0044-03-15 BC', 'ä;"', null, null),
		(3, 5e-324, 3.4028235e38, -0.0000000001, 9223372036854775807, 32767, null, '2024-06-01 00:00:00+05:30', null, null, null, null, null)`)
	o.Query = "select * from kinds order by i"
	// What the client's surroundings ask for changes nothing.
	t.Setenv("PGTZ", "Asia/Kolkata")
	address, err := url.Parse(os.Getenv(serverVariable))
	if err != nil {
		t.Fatal(err)
	}
	address.RawQuery = "DateStyle=German&extra_float_digits=0"
	t.Setenv("AXISFOLD_TEST_GERMAN", address.String())
	o.Connection = "AXISFOLD_TEST_GERMAN"
	nan := math.NaN()
	want := []float64{1, 0.1, float64(float32(0.1)), 12345678901234567890.0123456789, 1 << 53, -3, 1,
		2, nan, nan, nan, -1 << 63, nan, 0, 3, 5e-324, math.MaxFloat32, -1e-10, 1 << 63, 32767, nan}
	for column, times := range map[string]string{"stamp": "2024-02-29T12:45:30.25Z,,2024-05-31T18:30:00Z", "local": "2024-02-29T13:45:30,1999-12-31T23:59:59.123456,", "day": "2024-02-29,0044-03-15 BC,"} {
		for _, threads := range []int{1, 3} {
			o.Time, o.Groups = column, "pump"
			got, err := collect(o, chunkBytes, threads)
			if err != nil {
				t.Fatal(err)
			}
			if !sameNumbers(got.data, want) {
				t.Errorf("%v\n%v", got.data, want)
			}
			if strings.Join(got.times, ",") != times || strings.Join(got.groups, ",") != `a,ä;",` {
				t.Errorf("%q %q", got.times, got.groups)
			}
			for _, want := range []string{"on_off true and false are read as 1 and 0", "raw left out: bytes", "many left out: values that are not numbers",
				"large 2 whole numbers beyond 2^53 are rounded to the nearest double"} {
				if !slices.Contains(noteTexts(got.notes), want) {
					t.Errorf("no note %q among %q", want, noteTexts(got.notes))
				}
			}
		}
	}
}

// What a server refuses, in its words and ours; nothing asked may change a table.
func TestPostgresQueries(t *testing.T) {
	o := server(t, `drop table if exists small; create table small (a double precision, b text); insert into small values (1, 'x'), (2, 'y');
		create or replace function meddle() returns double precision language sql as 'delete from small returning 1.0::float8'`)
	for query, want := range map[string]string{
		"select a from small order by a":                          "[1 2]",
		"select c from small":                                     `postgres: column "c" does not exist (at character 8 of read.query)`,
		"select a from nowhere":                                   `relation "nowhere" does not exist`,
		"delete from small":                                       `begins with "delete"`,
		"select a from small; drop table small":                   "holds several statements",
		"with gone as (delete from small returning a) table gone": "read-only transaction",
		"select meddle() as a":                                    "read-only transaction",
		"select a from small where a > 5":                         "has a header but no rows",
		"select b from small":                                     "holds no column of numbers",
		"select a, a from small":                                  "has the same name as column 1",
		"select a / (2 - a) as q from small order by a":           "division by zero",
		"select 'Infinity'::float8 as a":                          `postgres: row 1: column 1 "a": +Inf is not a finite number`,
		"select pg_terminate_backend(pg_backend_pid())::int as a": "terminating connection due to administrator command",
	} {
		o.Query = query
		got, err := collect(o, chunkBytes, 2)
		said := fmt.Sprint(err)
		var e *Error
		if err == nil {
			said = fmt.Sprint(got.data)
		} else if !errors.As(err, &e) {
			t.Errorf("%s: %v", query, err)
		}
		if !strings.Contains(said, want) {
			t.Errorf("%s: %s, want %s", query, said, want)
		}
	}
	o.Query = "select a from small order by a"
	if got, err := collect(o, chunkBytes, 1); err != nil || len(got.data) != 2 {
		t.Errorf("the table was changed: %v", err)
	}
}

// Another client changes the rows between two passes: an error, whatever it does.
func TestPostgresRowsChange(t *testing.T) {
	for _, change := range []string{"insert into moving values (7)", "delete from moving where a = 3", "update moving set a = 2.5 where a = 2"} {
		o := server(t, "drop table if exists moving; create table moving (a double precision); insert into moving values (1), (2), (3)")
		o.Query = "select a from moving order by a"
		tab, err := Open(t.Context(), o)
		if err != nil {
			t.Fatal(err)
		}
		each := func() error {
			return tab.Each(t.Context(), 2, func(int, *Block) error { return nil }, func(*Block) error { return nil })
		}
		for range 2 {
			if err := each(); err != nil {
				t.Fatal(err)
			}
		}
		server(t, change)
		if err := each(); err == nil || !strings.Contains(err.Error(), "gave other rows than the time before") {
			t.Errorf("%s: %v", change, err)
		}
	}
}

// Secrets are never said: wrong passwords, strings that cannot be read, hosts that are not there.
func TestConnectionErrors(t *testing.T) {
	const secret = "s3cr3t-of-the-test"
	address := os.Getenv(serverVariable)
	cases := map[string]struct{ text, want string }{
		"nothing there": {"postgres://me:" + secret + "@127.0.0.1:1/db?sslmode=disable", "cannot connect: "},
		"no string":     {"postgres://me:" + secret + "@host:notaport/db", "the connection string cannot be read"},
		"half a string": {"host=127.0.0.1 password='" + secret, "the connection string cannot be read"},
		"unset":         {"", `the environment variable "AXISFOLD_TEST_SECRET" is not set`},
	}
	if u, err := url.Parse(address); err == nil && address != "" {
		u.User = url.UserPassword(u.User.Username(), secret)
		cases["wrong password"] = struct{ text, want string }{u.String(), "password authentication failed for user"}
	}
	for name, c := range cases {
		t.Setenv("AXISFOLD_TEST_SECRET", c.text)
		_, err := Open(t.Context(), Options{Format: "postgres", Query: "select 1 as a", Connection: "AXISFOLD_TEST_SECRET"})
		var e *Error
		if !errors.As(err, &e) || e.Kind != WrongInput || !strings.Contains(e.Error(), c.want) {
			t.Errorf("%s: %v", name, err)
		}
		if e != nil && strings.Contains(fmt.Sprintf("%v %v %+v", e, e.Hint, *e), secret) {
			t.Errorf("%s: the password is said: %v", name, e)
		}
	}
}

// cutter passes bytes between a client and the server, and goes away after so many of the
// server's.
type cutter struct {
	net.Listener
	server string
	left   atomic.Int64
}

func (c *cutter) serve() {
	for {
		client, err := c.Accept()
		if err != nil {
			return
		}
		go func() {
			defer client.Close()
			upstream, err := net.Dial("tcp", c.server)
			if err != nil {
				return
			}
			defer upstream.Close()
			go io.Copy(upstream, client)
			buf := make([]byte, 4096)
			for {
				n, err := upstream.Read(buf)
				if err != nil || c.left.Add(-int64(n)) < 0 {
					return
				}
				if _, err := client.Write(buf[:n]); err != nil {
					return
				}
			}
		}()
	}
}

// The connection goes away at any time: an error that says where, and no wait.
func TestServerGoesAway(t *testing.T) {
	o := server(t, "drop table if exists long; create table long as select i::float8 as a, sqrt(i) as b from generate_series(1, 60000) as i")
	address, err := url.Parse(os.Getenv(serverVariable))
	if err != nil {
		t.Fatal(err)
	}
	listener, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	c := &cutter{Listener: listener, server: address.Host}
	defer c.Close()
	go c.serve()
	address.Host = listener.Addr().String()
	address.RawQuery = "sslmode=disable"
	t.Setenv("AXISFOLD_TEST_CUT", address.String())
	o.Connection, o.Query = "AXISFOLD_TEST_CUT", "select a, b from long order by a"
	midway := 0
	for _, bytes := range []int64{0, 100, 1000, 2000, 50_000, 500_000, 1_000_000, 1 << 40} {
		c.left.Store(bytes)
		start := time.Now()
		got, err := collect(o, chunkBytes, 2)
		if bytes == 1<<40 {
			if err != nil || len(got.data) != 120000 {
				t.Errorf("nothing cut: %v", err)
			}
			continue
		}
		var e *Error
		if !errors.As(err, &e) {
			t.Errorf("cut after %d bytes: %v", bytes, err)
			continue
		}
		if strings.Contains(e.Error(), "postgres: row ") && strings.Contains(e.Error(), "the connection was lost") {
			midway++
		}
		if took := time.Since(start); took > 20*time.Second {
			t.Errorf("cut after %d bytes: %v until the error", bytes, took)
		}
	}
	if midway < 3 {
		t.Errorf("%d cuts in the middle of the rows", midway)
	}
}

// An end of the context ends the reading.
func TestPostgresInterrupted(t *testing.T) {
	o := server(t, "select 1")
	o.Query = "select i::float8 as a, pg_sleep(0.01)::text as b from generate_series(1, 100000) as i"
	tab, err := Open(t.Context(), o)
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithTimeout(t.Context(), 300*time.Millisecond)
	defer cancel()
	start := time.Now()
	err = tab.Each(ctx, 2, func(int, *Block) error { return nil }, func(*Block) error { return nil })
	if !errors.Is(err, context.DeadlineExceeded) || time.Since(start) > 10*time.Second {
		t.Errorf("%v after %v", err, time.Since(start))
	}
}
