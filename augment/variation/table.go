package variation

import (
	"fmt"
	"io"
	"strconv"
	"text/tabwriter"
)

// Table writes the measurement as text in aligned columns: one line per
// figure of all labels together, and, if asked, of each label.
func (m *Measured) Table(w io.Writer, labels bool) error {
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintf(t, "%d takes of %d labels\n\n", m.Takes, m.Labels)
	fmt.Fprintln(t, "label\tmotion\tat its ends\tperiodicity\ttakes")
	for _, k := range m.Motions {
		if k.Label == "" || labels {
			fmt.Fprintf(t, "%s\t%s\t%s\t%s\t%d\n", everything(k.Label, "all"), k.Kind, number(k.Ends), number(k.Periodicity), k.Takes)
		}
	}
	fmt.Fprintln(t, "\nlabel\twhat\tof\tunit\tmeasured\t95 % interval\tpairs\ttakes\tused\tfrom")
	for _, f := range m.Figures {
		if f.Label == "" || labels {
			measured, interval := "-", "-"
			if f.shown() {
				measured, interval = number(f.Measured), number(f.Low)+" to "+number(f.High)
			}
			fmt.Fprintf(t, "%s\t%s\t%s\t%s\t%s\t%s\t%d\t%d\t%s\t%s\n", everything(f.Label, "all"), f.Part, everything(f.Of, "whole"),
				f.Unit, measured, interval, f.Pairs, f.Takes, number(f.Used), f.from())
		}
	}
	m.spectra(t)
	m.couplings(t)
	return t.Flush()
}

func (m *Measured) spectra(t io.Writer) {
	for i, s := range m.Spectra {
		if i == 0 {
			fmt.Fprintln(t, "\nchannel at rest\tshare of the variance in equal bands from 0 to half the frame rate")
		}
		fmt.Fprintf(t, "%s", s.Channel)
		for _, x := range s.Shares {
			fmt.Fprintf(t, "\t%s", number(x))
		}
		fmt.Fprintf(t, "\t%s Hz\n", number(s.Rate/2))
	}
}

func (m *Measured) couplings(t io.Writer) {
	for i, c := range m.Coupling {
		if i == 0 {
			fmt.Fprintln(t, "\nlimb\tlimb\tcoupling\t95 % interval\tp")
		}
		fmt.Fprintf(t, "%s\t%s\t%s\t%s to %s\t%s\n", c.A, c.B, number(c.Rho), number(c.Low), number(c.High), number(c.P))
	}
}

// shown tells whether the recordings show the size at all.
func (f Figure) shown() bool { return f.Takes > 0 && (f.Why == "" || f.High > 0) }

// from says where the used size comes from.
func (f Figure) from() string {
	switch {
	case f.Default && f.Why != "":
		return "default: " + f.Why
	case f.Default:
		return "default"
	case f.Why != "":
		return "measured: " + f.Why
	}
	return "measured"
}

func everything(name, all string) string {
	if name == "" {
		return all
	}
	return name
}

// number writes three digits.
func number(v float64) string { return strconv.FormatFloat(v, 'g', 3, 64) }
