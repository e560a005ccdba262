// Package export writes the set: the finished output folder of Parquet tables,
// what was attached to them, and the manifest that seals it; and it holds a
// set against its manifest later.
//
// # A set on disk
//
//	set/manifest.json                               written last; see [Manifest]
//	set/takes/split=train/part-00000.parquet …      one row per take
//	set/frames/split=train/part-00000.parquet …     optional, one row per frame
//	set/score.json …                                whatever was attached
//
// A folder without a manifest is no set. While one is being written, a file
// named unfinished.jsonl stands in the folder; it is removed after the manifest
// is in place. A crash at any moment therefore leaves either a complete set or
// a folder that the next [Create] recognises, cleans and begins again.
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
// A channel's column has the channel's name. Where that is already the name of
// one of the columns above, upper and lower case apart, "_channel" is added.
// The file metadata under the key strandwise.layout says which channel stands
// in which column, with quantities, units, groups and limbs; see [FileLayout].
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
