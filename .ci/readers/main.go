// Command readers opens a set with readers that share nothing with what wrote
// it, and compares what they find. It is a module of its own, so that the product
// does not carry them.
//
//	readers arrow SET      what arrow/go finds, as JSON
//	readers duckdb SET     what DuckDB finds, as JSON
//	readers sql README     runs the SQL of a Markdown file in DuckDB, from the current folder
//	readers compare FILE…  holds the facts of all files against those of the first
package main

import (
	"encoding/json"
	"fmt"
	"iter"
	"maps"
	"os"
)

func main() {
	if err := run(os.Args[1:]); err != nil {
		fmt.Fprintln(os.Stderr, "readers:", err)
		os.Exit(1)
	}
}

func run(args []string) error {
	if len(args) < 2 {
		return fmt.Errorf("say what to do: arrow, duckdb, sql or compare, and with what")
	}
	var f *facts
	var err error
	switch args[0] {
	case "arrow":
		f, err = readArrow(args[1])
	case "duckdb":
		f, err = readDuckDB(args[1])
	case "sql":
		return runSQL(args[1])
	case "compare":
		return compare(args[1:])
	default:
		err = fmt.Errorf("unknown reader %q", args[0])
	}
	if err != nil {
		return err
	}
	return json.NewEncoder(os.Stdout).Encode(f)
}

func keysOf[V any](m map[string]V) iter.Seq[string] { return maps.Keys(m) }

// tables are those of a set that the facts are about.
func tables() []string { return []string{"takes", "frames", "windows"} }

// compared lists the metadata that all readers of Parquet must find the same.
func compared() []string {
	return []string{"strandwise.layout", "strandwise.run", "strandwise.windows"}
}
