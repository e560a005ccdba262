// Package look shows the takes of a set to a person, on a page that a browser on
// the same machine opens, and writes down which takes the person marks.
//
//	set, err := look.Open("set")
//	log, err := marks.Open("set", "", time.Now)
//	err = look.Serve(ctx, set, log, 0, func(address string) error { _, err := fmt.Println(address); return err })
//
// # What is held
//
// [Open] reads who the takes are (id, label, subject, session, split, origin,
// source, draw, rank, gate values) from the table takes once, without their
// signals, and keeps about 160 bytes of each (BenchmarkOpen). Signals are read when a take is
// looked at, from its row group, of which the last few are kept.
//
// # Who may see it
//
// A take is personal data. The server listens on 127.0.0.1 alone. The address it
// announces carries a token that opens the page once: it is exchanged for a
// cookie that scripts cannot read and that no other site's pages send
// (HttpOnly, SameSite=Strict), and is worth nothing from then on. Everything but
// that exchange needs the cookie. Requests are refused that name another host
// than the address (as a foreign page does whose name was pointed at 127.0.0.1),
// that come from a page of another origin, or whose path or query is not one the
// page uses; marks are only taken with a secret that the page alone can read.
// Takes are asked for by their number in the set, never by a text that stands in
// a recording.
//
// The page is made of files of this package and loads nothing from elsewhere; its
// content security policy allows no script and no style that stands in the
// document. What recordings say is put into it as text.
package look
