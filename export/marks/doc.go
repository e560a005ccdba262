// Package marks keeps what a person said of the takes of a set: which to drop
// and which to keep. It knows no page and no server, so that what writes sets
// can honour marks too.
//
// # The file
//
// Marks stand in marks.csv in the folder of the set, in UTF-8, one line for each
// time a person marked a take:
//
//	time,take,mark,undo,by
//	2026-03-01T10:00:00Z,bow-1~3,drop,,pim
//	2026-03-01T10:00:04Z,bow-1~3,none,undo,pim
//
//	time   when, by the clock of the machine, in UTC (RFC 3339)
//	take   id of the take
//	mark   what holds from now on: drop, keep or none
//	undo   "undo" when the line takes back the last mark not yet taken back, else empty
//	by     who, as given; may be empty
//
// Lines are only ever added, each in one write that reaches the disk before the
// mark counts as made. The last line of a take wins. A crash can leave a torn
// last line, without its line end: such a line counts when it is whole, and else
// was never acknowledged, so it is passed over, and removed by the next mark.
// Fields are quoted as in RFC 4180, but for line ends, which no field may hold:
// every line stands for itself, so that damage to one harms no other.
package marks
