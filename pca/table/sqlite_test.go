package table

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// database makes an SQLite file.
func database(t testing.TB, statements ...string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "x.db")
	db, err := sql.Open("sqlite", path)
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	for _, s := range statements {
		if _, err := db.Exec(s); err != nil {
			t.Fatalf("%s: %v", s, err)
		}
	}
	return path
}

func TestKindsOfSQLite(t *testing.T) {
	path := database(t, "create table x (flow real, count integer, stamp timestamp, pump text, loose, stuff blob)",
		"insert into x values (1.5, 9007199254740993, '2024-02-29 13:45:30', 'a', 1, x'00')",
		"insert into x values (null, 9223372036854775807, '2024-02-29 13:50:30+01:00', 'b', '2.5', x'01')",
		"insert into x values (-0.1, -3, '2024-03-01', null, 'NA', null)")
	for _, threads := range []int{1, 3} {
		got, err := collect(Options{Files: []string{path}, Time: "stamp", Groups: "pump"}, chunkBytes, threads)
		if err != nil {
			t.Fatal(err)
		}
		if want := []float64{1.5, 1 << 53, 1, math.NaN(), 1 << 63, 2.5, -0.1, -3, math.NaN()}; !sameNumbers(got.data, want) {
			t.Errorf("%v", got.data)
		}
		if strings.Join(got.times, " ") != "2024-02-29T13:45:30Z 2024-02-29T13:50:30+01:00 2024-03-01T00:00:00Z" || strings.Join(got.groups, ",") != "a,b," {
			t.Errorf("%q %q", got.times, got.groups)
		}
		for _, want := range []string{"count 2 whole numbers beyond 2^53 are rounded to the nearest double", "loose 1 numbers are stored as text", "stuff left out: bytes"} {
			if !slices.Contains(noteTexts(got.notes), want) {
				t.Errorf("no note %q among %q", want, noteTexts(got.notes))
			}
		}
	}
}

// What is asked of a database, and what is said when it cannot be had. Nothing asked may
// change the file.
func TestQueries(t *testing.T) {
	one := database(t, "create table x (a real, b real)", "insert into x values (2, 1), (1, 2), (3, 0)")
	two := database(t, "create table x (a real)", "create table y (b real)", "insert into y values (1)")
	keyed := database(t, "create table x (a integer primary key, b real) without rowid", "insert into x values (3, 1), (1, 5), (2, 7)")
	many := database(t, "create table x (a real, b text)", "insert into x values (1, 'p')", "create view v as select a, a as a from x")
	before, err := os.ReadFile(one)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct{ path, query, want string }{
		{one, "", "[2 1 1 2 3 0]"},
		{one, "select b, a from x order by a", "[2 1 1 2 0 3]"},
		{one, "select b from x where a > 1; -- the end", "[1 0]"},
		{one, "with y as (select a from x order by a) select * from y", "[1 2 3]"},
		{keyed, "", "[1 5 2 7 3 1]"},
		{two, "", `holds several tables: x, y; set read.query, for example: select * from "x" order by rowid`},
		{two, "select * from x", "has a header but no rows"},
		{database(t, "create table x (a real)", "drop table x"), "", "holds no table"},
		{one, "select c from x", "no such column: c"},
		{one, "selekt a from x", `read.query: begins with "selekt", expected select, with, values or table`},
		{one, "select a from x; delete from x", "holds several statements, expected one"},
		{one, "with y as (select 1) delete from x", "readonly"},
		{one, "insert into x values (1, 1)", `begins with "insert"`},
		{one, " -- nothing", "read.query: is empty"},
		{one, "select a, b as a from x", `column 2 "a": has the same name as column 1; give every column a name of its own with as`},
		{one, "select a, load_extension('x') as b from x", "not authorized"},
		{one, "select a / 0 as q, 9e999 as i from x", `row 1: column 2 "i": +Inf is not a finite number`},
		{many, "select b from x", "holds no column of numbers"},
	} {
		got, err := collect(Options{Files: []string{c.path}, Query: c.query}, chunkBytes, 2)
		var said string
		var e *Error
		switch {
		case err == nil:
			said = fmt.Sprint(got.data)
		case errors.As(err, &e):
			said = strings.TrimSuffix(err.Error()+"; "+e.Hint, "; ")
		default:
			said = "no Error of the package: " + err.Error()
		}
		if !strings.Contains(said, c.want) {
			t.Errorf("%q: %s\nwant %s", c.query, said, c.want)
		}
	}
	if after, err := os.ReadFile(one); err != nil || string(after) != string(before) {
		t.Error("a query changed the file")
	}
	for query, want := range map[string]bool{"select a from x order by a": false, "select a from x": true, "select a from (select a from x order by a)": true, "select 'order by' from x": true,
		"select a from x /* order by a */": true, "select a from x\nORDER\nBY a": false, `select a as "order by" from x`: true} {
		ordered, err := checkQuery(query)
		if err != nil || ordered == want {
			t.Errorf("%q: ordered %v, %v", query, ordered, err)
		}
	}
}

// Rows that change between passes, or come in another order, are an error.
func TestChangedAnswer(t *testing.T) {
	path := database(t, "create table x (a real)", "insert into x values (1), (2), (3)")
	db, err := sql.Open("sqlite", path)
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	tab, err := Open(t.Context(), Options{Files: []string{path}, Query: "select a from x order by random()"})
	if err != nil {
		t.Fatal(err)
	}
	nothing := func(*Block) error { return nil }
	each := func() error {
		return tab.Each(context.Background(), 2, func(int, *Block) error { return nil }, nothing)
	}
	if err := each(); err != nil {
		t.Fatal(err)
	}
	for range 100 {
		if err = each(); err != nil {
			break
		}
	}
	if err == nil || !strings.Contains(err.Error(), "gave other rows than the time before") {
		t.Errorf("%v", err)
	}
	if tab.Unordered() {
		t.Error("an order by is there")
	}
	if tab, err := Open(t.Context(), Options{Files: []string{path}, Query: "select a from x"}); err != nil || !tab.Unordered() {
		t.Errorf("no order by: %v", err)
	}
}
