// Package table holds the rules that formats of tabular recordings share: what
// the columns of identity and time are called, and how the values of a clock
// become seconds.
package table
