// Package pages writes Parquet files column by column, laying the pages out
// itself: flat columns and lists of numbers, whose bytes are copied and compressed and
// nothing else.
//
// # Why not row by row
//
// The columns of a set are known only at run time, one per channel, so rows
// cannot be Go structs, and a general row writer spends most of its time on
// boxing each number (see the benchmarks of this package). Here a caller asks
// for the bytes of n numbers and fills them in. The structures of the file,
// page headers and footer, are those of github.com/parquet-go/parquet-go.
//
// # Layout
//
// What is written is plain Apache Parquet, format version 1 pages, which every
// reader understands (https://parquet.apache.org/docs/file-format/):
//
//   - Text is a dictionary and run-length encoded indexes into it.
//   - Numbers are plain little-endian values.
//   - 16-bit whole numbers, which the format does not know, are 32-bit ones
//     annotated INT(16): readers give them back in 16 bits.
//   - A list is the standard three-level LIST: a required group, a repeated
//     group "list", a required "element". Its levels are two runs per row.
//   - Pages are cut at about [PageBytes] at the end of a row and compressed
//     with Snappy, Zstandard or not at all; each carries the CRC-32 of its bytes.
//   - Text, whole-number and 64-bit columns state their smallest and largest
//     value per row group, so that a reader can skip; 32-bit floats do not.
//
// The bytes depend on the values and the order of the calls, and on nothing
// else: no time stamp, no machine.
package pages
