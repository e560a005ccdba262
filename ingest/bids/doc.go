// Package bids reads motion recordings as the Brain Imaging Data Structure
// (BIDS) stores them, by its extension for motion.
//
// The standard is the public BIDS specification (bids.neuroimaging.io,
// versions 1.8 to 1.10: "Motion", "Task events", "Common principles"). One
// recording of one tracking system is a table of numbers without a header,
//
//	sub-<label>[_ses-<label>]_task-<label>_tracksys-<label>[_acq-<label>][_run-<index>]_motion.tsv
//
// described by files that differ from it in the last part of their name:
// *_channels.tsv says what its columns are, *_motion.json how often they were
// sampled, *_events.tsv what happened when.
//
// # Files that describe
//
// By the inheritance principle of the standard such a file may stand beside the
// table or in a folder above it, up to the one that holds the folder of the
// subject, and may leave out any part of the name. Of tables the one that is
// nearest, and then the most specific, holds. Of JSON files all hold: each key
// has its value from the nearest, most specific file that states it. The
// standard allows one such file in each folder; where there are more, they are
// read in this order and not refused.
//
// # What is read
//
//   - Channels are named point.type.component ("left_wrist.accel.x"), whatever
//     *_channels.tsv calls them. A miscellaneous channel without a component
//     keeps its own name. What would share a name with a channel before it
//     tracks a point of its own: "left_wrist_2.accel.x".
//   - Units are passed on as stated. A unit that belongs to another type of
//     channel is a fault. A channel in a unit this program does not know keeps
//     its numbers as recorded and counts as miscellaneous, with a notice.
//   - Channels whose status is bad are left out, with a notice.
//   - A channel of the type LATENCY is the clock. Without one, or where it holds
//     no values, rows are one period of SamplingFrequencyEffective apart, else
//     of SamplingFrequency, else of the sampling_frequency all channels share.
//     Latencies are passed on as they are, in whatever order.
//   - Values that say n/a, or what the JSON key MissingValues states, are
//     missing.
//   - Subject and session come from the name, and the label is the task. Where
//     events with a duration name what was done, they annotate the recording
//     and it has no label of its own.
//
// # Departures from the standard
//
// Types are read in upper or lower case, and ANGACC, as the first versions of
// the extension have it, as ANGACCEL. MotionChannelCount may or may not count
// LATENCY and MISC channels. A first row that repeats the channel names is
// passed over. Reference frames (*_channels.json) and *_scans.tsv are not
// read; nor is StartTime, on which a notice is given where there are events.
package bids
