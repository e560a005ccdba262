package channels

import "iter"

// Stream is a sequence of takes. Every stage of the program reads and writes
// streams under one contract:
//
//   - Order: takes come in the order of the recordings, always the same for
//     the same input.
//   - Ownership: each take belongs to the receiver, who may keep it or change
//     its samples; the producer does not touch it again. Layouts are shared
//     and read-only.
//   - Errors: an error comes with a nil take, once, as the last pair. What came
//     before it is sound, but the stream as a whole is not complete.
//   - Ending: a receiver that stops early ends the producer, which releases
//     its files before the range statement returns.
type Stream = iter.Seq2[*Take, error]
