// Package report writes the page on which people judge a set: one HTML file
// that needs nothing else. It loads nothing, runs no script, follows the light
// or dark theme of the reader, prints, and reads on a telephone.
//
// # What stands on it
//
// In this order: the verdict; cautions; what went in; how takes vary; recorded
// takes beside synthetic ones, label by label; how limbs share their timing; the
// gates; the score; where it all came from and how to repeat it. A section
// without data says so in a sentence, and why.
//
// [Write] turns an [Input] into the page; the same input gives the same bytes.
// The package knows nothing of how takes are made or scored: whoever calls it
// fills the input. A [Collector] gathers the takes that are drawn, and counts
// them, while a set is written or read, in bounded memory and in any order.
//
// # Figures
//
// Figures are SVG written here, with classes for colours, so that one style
// sheet serves both themes. (The plots of gonum carry their colours in a style
// attribute on every line: they stay as they are when the theme changes, and a
// security policy that forbids inline styles strips them.) Every figure has a
// caption that says what to see and a table of its numbers.
//
// # Text that is not ours
//
// Labels, subjects, names of channels and paths may hold anything. They are
// escaped by html/template, isolated from the writing direction around them, and
// shortened; a label's whole text stands once, in the section on it. The
// Content-Security-Policy of the page allows its one style sheet, by its hash, and
// nothing else.
package report
