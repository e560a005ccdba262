// Package export writes the set: the finished output folder of Parquet tables,
// what was attached to them, and the manifest that seals it; and it holds a
// set against its manifest later.
//
// # A set on disk
//
//	set/manifest.json                               written last; see [Manifest]
//	set/takes/split=train/part-00000.parquet …      one row per take
//	set/frames/split=train/part-00000.parquet …     optional, one row per frame
//	set/windows/split=train/part-00000.parquet …    optional, one row per window
//	set/CARD.md                                     the set told to people; see [Card]
//	set/croissant.json                              the set told to tools; see [About]
//	set/score.json …                                whatever was attached
//
// A folder without a manifest is no set.
//
// # Buckets
//
// A set is written in buckets, each a file per table and split. A take belongs
// to the bucket that a hash of its source take's id says, see [BucketOf], so the
// files do not depend on who makes them, in what order or how many at a time.
// Inside a bucket takes stand in the order of the recordings, synthetic ones
// behind their source in the order of choice: the first k of a source are the
// best k. Only a bucket twice as large as it should be has further files,
// part-00000_00002.parquet and so on.
//
// # A set in the making
//
// While a set is being written its folder holds a folder of the name unfinished:
//
//	unfinished/lock                 locked while a process writes the set
//	unfinished/plan.json            all that decides the bytes of the set; see [Options]
//	unfinished/bucket-00000.json …  files and counts of each finished bucket
//	unfinished/attached-NAME        what was attached, such as score.json
//	unfinished/notes.json           notices and what the card says
//
// Every file is written under a temporary name, made to last, and renamed; a
// bucket is recorded when its files are in place, and the manifest comes last,
// after which the folder unfinished goes. A crash at any moment therefore
// leaves either a whole set or a folder that the next [Create] of the same plan
// goes on with, to the same bytes; of another plan it tells what differs. The
// lock ends with its process however that ends, so none is ever stale.
//
// Several processes may write shards of one set at a time, on machines that
// share the folder: shard i of n makes the buckets that leave i when divided by
// n, and [Seal] makes a set of them. Two that make the same bucket put the same
// bytes in place. More shards than buckets have nothing to do.
//
// # The tables
//
// The split stands in the folder's name, in the key=value form that readers of
// partitioned tables turn into a column; takes without a split train.
//
// Table takes:
//
//	id, label, subject, session   text; subject and session may be empty
//	origin                        "recorded" or "synthetic"
//	source, draw, rank, method    how a synthetic take was made; null for recorded ones
//	parameters                    what was drawn, a JSON object; null for recorded takes
//	frames                        number of frames
//	rate_hz                       mean frame rate
//	start_s                       clock of the first frame in seconds
//	time_s                        list of 32-bit floats, seconds from the first frame
//	one column per channel        list of 32-bit floats, in the channel's SI unit
//
// Table frames:
//
//	take, frame                   id of the take, number of the frame from 0
//	time_s                        clock of the frame in seconds, a 64-bit float
//	one column per channel        32-bit floats
//
// Table windows:
//
//	take, window                  id of the take, number of the window from 0
//	label, subject, session       as in the table takes
//	origin, source, rank          as in the table takes
//	frames                        frames of the take in the window, the rest being padding
//	rate_hz                       mean frame rate of the take
//	start_s                       clock of the window's first frame in seconds
//	one column per channel        list of 32-bit floats, or of 16-bit numbers
//
// [Windowing] tells how takes are cut. All lists have one length. Parquet has no
// list of fixed size, so they are its plain lists; the metadata key ARROW:schema
// holds the Arrow schema in which they are of fixed size, and readers of Arrow
// give them so.
//
// Text columns are dictionaries. The footer states the smallest and the largest
// value of every text and number column of a row group, by which a reader skips
// what it does not want of a label, subject or take; the split is the folder.
//
// A channel's column has the channel's name. Where that is already the name of
// one of the columns above, upper and lower case apart, "_channel" is added.
// The file metadata under the key strandwise.layout says which channel stands
// in which column, with quantities, units, groups and limbs; see [FileLayout].
//
// # The metadata of a file
//
// Key–value metadata are JSON objects, each with the field format that names its
// form:
//
//	strandwise.layout      table, rate, channels with columns, quantities and units, groups
//	                       with limbs, cautions; see [FileLayout]
//	strandwise.run         version of the program, seed and plan; see [Run]
//	strandwise.windows     table windows: length, hop, padding, scales; see [WindowsLayout]
//	strandwise.skeletons   table takes: skeletons, as told below
//	ARROW:schema           table windows: the Arrow schema, in base64
//
// The manifest holds the same for the whole set.
//
// In files of the table takes the key strandwise.skeletons holds the skeletons
// of the takes that have one, a JSON list:
//
//	[{"takes": ["bow_1", "bow_1~0"], "skeleton": {"unit": "cm", "joints": […]}}]
//
// Each skeleton stands there once with the ids of its takes in the file, in the
// form told of at [body.Skeleton]; a synthetic take has that of its source. With
// it the channels of a take are enough to write the motion as BVH again.
//
// A file in the form of the table takes may also stand alone, outside a set: see
// [TakeRows] and package recording.
package export
