package main

import (
	"database/sql"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"

	_ "github.com/duckdb/duckdb-go/v2" // the driver
)

// readDuckDB finds the facts with DuckDB, in SQL alone.
func readDuckDB(set string) (*facts, error) {
	db, err := sql.Open("duckdb", "")
	if err != nil {
		return nil, err
	}
	defer db.Close()
	out := &facts{Reader: "DuckDB", Tables: map[string]*table{}, Metadata: map[string]map[string]string{}}
	for _, name := range tables() {
		files := filepath.Join(set, name, "*", "*.parquet")
		q := query{db: db, from: fmt.Sprintf("read_parquet(%s, hive_partitioning = true)", quote(files, `'`))}
		if out.Tables[name], err = q.table(); err != nil {
			return nil, fmt.Errorf("table %s: %w", name, err)
		}
		if out.Metadata[name], err = q.metadata(files); err != nil {
			return nil, fmt.Errorf("metadata of %s: %w", name, err)
		}
	}
	return out, nil
}

func quote(text, with string) string { return with + strings.ReplaceAll(text, with, with+with) + with }

// query asks about the rows of one table.
type query struct {
	db   *sql.DB
	from string
}

func (q query) table() (*table, error) {
	t := newTable()
	if err := q.db.QueryRow("SELECT count(*) FROM " + q.from).Scan(&t.Rows); err != nil {
		return nil, err
	}
	columns, err := q.columns()
	if err != nil {
		return nil, err
	}
	key := "split"
	for _, c := range columns {
		if t.Types[c.name] = c.typ; c.name == "split" {
			continue
		}
		if c.typ == "VARCHAR" {
			if c.name == "label" || c.name == "origin" {
				key += " || '|' || " + c.name
			}
			continue
		}
		if err := q.sum(t, c); err != nil {
			return nil, err
		}
	}
	return t, q.counts(t, key)
}

type column struct{ name, typ string }

func (q query) columns() ([]column, error) {
	rows, err := q.db.Query("SELECT column_name, column_type FROM (DESCRIBE SELECT * FROM " + q.from + ")")
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var out []column
	for rows.Next() {
		var c column
		if err := rows.Scan(&c.name, &c.typ); err != nil {
			return nil, err
		}
		out = append(out, c)
	}
	return out, rows.Err()
}

// sum counts and sums a column of numbers, or what its lists hold.
func (q query) sum(t *table, c column) error {
	values := quote(c.name, `"`) + "::DOUBLE"
	if strings.HasSuffix(c.typ, "]") {
		values = "unnest(" + quote(c.name, `"`) + ")::DOUBLE"
	}
	var n int64
	var total sql.NullFloat64
	if err := q.db.QueryRow("SELECT count(v), sum(v) FROM (SELECT "+values+" AS v FROM "+q.from+")").Scan(&n, &total); err != nil {
		return fmt.Errorf("column %s: %w", c.name, err)
	}
	if n > 0 {
		t.Numbers[c.name], t.Sums[c.name] = n, total.Float64
	}
	return nil
}

func (q query) counts(t *table, key string) error {
	rows, err := q.db.Query("SELECT " + key + ", count(*) FROM " + q.from + " GROUP BY ALL")
	if err != nil {
		return err
	}
	defer rows.Close()
	for rows.Next() {
		var key string
		var n int64
		if err := rows.Scan(&key, &n); err != nil {
			return err
		}
		t.Counts[key] = n
	}
	return rows.Err()
}

// metadata returns the metadata of the table's first file.
func (q query) metadata(files string) (map[string]string, error) {
	rows, err := q.db.Query("SELECT file_name, decode(key), decode(value) FROM parquet_kv_metadata(" + quote(files, `'`) + ") ORDER BY file_name")
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	all, first := map[string]string{}, ""
	for rows.Next() {
		var name, key, value string
		if err := rows.Scan(&name, &key, &value); err != nil {
			return nil, err
		}
		if first == "" {
			first = name
		}
		if name == first {
			all[key] = value
		}
	}
	out := map[string]string{}
	for _, key := range compared() {
		if text, ok := all[key]; ok {
			out[key] = text
		}
	}
	return out, rows.Err()
}

// runSQL runs every block of SQL in a Markdown file, from the current folder,
// and wants each to give rows.
func runSQL(path string) error {
	text, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	db, err := sql.Open("duckdb", "")
	if err != nil {
		return err
	}
	defer db.Close()
	blocks := regexp.MustCompile("(?s)```sql\n(.*?)```").FindAllStringSubmatch(string(text), -1)
	if len(blocks) == 0 {
		return fmt.Errorf("%s holds no block of SQL", path)
	}
	for _, b := range blocks {
		n, err := countRows(db, b[1])
		if err == nil && n == 0 {
			err = fmt.Errorf("no rows")
		}
		if err != nil {
			return fmt.Errorf("%s: %w in\n%s", path, err, b[1])
		}
		fmt.Printf("%d rows of\n%s", n, b[1])
	}
	return nil
}

func countRows(db *sql.DB, text string) (int, error) {
	rows, err := db.Query(text)
	if err != nil {
		return 0, err
	}
	defer rows.Close()
	n := 0
	for rows.Next() {
		n++
	}
	return n, rows.Err()
}
