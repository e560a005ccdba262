// Package recording writes takes into a file of their own, outside a set, from
// which they can be read again.
//
// # CSV
//
// The long form, one row a frame, the rows of a take together:
//
//	take,label,subject,session,frame,time_s,LeftHand.pos.x,LeftHand.pos.y …
//
// After session stands a column split when some take states one. The frame
// counts from 0; time_s is the take's own clock in seconds. A channel's column
// is named by tracked point, type and component, the point as the recording
// names it; a channel of which not all three are known keeps its name. A unit
// that the name itself states in brackets is cut off, because the values are in
// SI units, whatever they were recorded in; and where the name is that of one of
// the other columns, upper and lower case apart, "_channel" is added.
//
// Numbers have the fewest digits that read back as the same 64-bit float. A
// missing value is an empty field. Texts are quoted as RFC 4180 has it, and also
// where one holds a character that some programs take for a separator or for the
// start of a comment. Rows end in a line feed.
//
// # Parquet and Arrow IPC
//
// One row a take, as in the table takes of a set (see package export): the same
// columns, and the same metadata under strandwise.layout and
// strandwise.skeletons. A text column split stands at the end when some take
// states a split. Times and values are 32-bit floats, missing values NaN; a take
// whose values or whose clock those cannot hold is refused.
//
// Arrow IPC has two forms, a stream and a file around it that can be read from
// any place; see [NewArrowStream] and [NewArrowFile]. [NewGrownStream] is for takes
// that are made while they are written.
//
// # How to write
//
// What stands at the head of a file (columns, metadata) depends on all takes, so
// they are gone over twice: [Contents] notes every one of them, then a [Writer]
// gets them in the same order. No take is kept. [Files] puts what was written in
// place once it is whole.
package recording
