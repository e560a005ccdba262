// Package puppets makes the recordings of an invented company, the Lantern
// Street Puppet Theatre, which cues its lights and sound from two wristbands.
// No person, place or recording in it is real. It exists so that the program
// can be tried, taught and tested without anyone's data.
//
// # What is recorded
//
// Four puppeteers perform six two-handed cues five times each, 120 takes in
// two sessions: takes 1 to 3 at the matinee, 4 and 5 in the evening. Each
// wristband carries an accelerometer (m/s²) and a gyroscope (rad/s), sampled
// at 50 Hz. The cues go in pairs that are easily confused:
//
//	cue            hands timed    strokes
//	raise-curtain  together       low, high, home
//	drop-curtain   together       high, low, home
//	thunder-roll   together       quick shakes of both forearms
//	rain-patter    independently  the same shakes, slower
//	light-lantern  independently  left holds out, right reaches, then turns over
//	snuff-lantern  independently  left holds out, right turns over, then reaches
//
// "Together" means that one draw of delay, stroke times and rests serves both
// hands, but for a constant lead of the favoured hand; "independently" means a
// draw of its own for each hand. Both hands share the person's habits and the
// moment the logger was started in every cue.
//
// # How it is made
//
// An arm is a chain of rotations and bones: a swaying trunk, a shoulder of
// three angles, an elbow, and the turn of the forearm, on which the band sits
// a little askew. The angles follow minimum-jerk strokes between postures, with
// rests. The chain gives the wrist's acceleration a and orientation R exactly;
// the accelerometer senses the specific force Rᵀ(a − g), the gyroscope the
// angular rate in its own axes. Then come bias, white noise, clipping at ±8 g
// and ±1000 deg/s, and 16-bit quantisation.
//
// People differ in arm length, tempo, amplitude, rests, postures, favoured
// hand and the seat of the band; takes of one person differ much less, in
// delay, stroke times, rests, amplitude and posture.
//
// The logger has the faults real loggers have: a clock that jitters by about a
// millisecond (each sample is taken at its stamped instant), gaps of one or
// two frames in about a fifth of the takes, clipping in the strongest take (the
// last thunder-roll of the liveliest puppeteer, played to the gallery) and, with
// some seeds, in a few other lively ones, and one puppeteer, fidget, who leaves
// hardly any rest before and after a cue.
//
// Everything drawn comes from generators keyed by the seed and by what is
// drawn: the company's habits by the seed alone, the seat of the bands by
// person and session, a take by person, cue and take number.
package puppets
