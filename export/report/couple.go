package report

import "fmt"

// coupling is the section on how limbs share their timing.
type coupling struct {
	Missing string
	Figure  *figure
	ByLabel *table
}

func (b *builder) coupling() coupling {
	var c coupling
	var all, labels []Pair
	for _, p := range b.in.Coupling {
		if p.Label == "" {
			all = append(all, p)
		} else {
			labels = append(labels, p)
		}
	}
	if len(all)+len(labels) == 0 {
		c.Missing = missing("How far limbs share their timing was not measured", b.in.Absent.Coupling)
		return c
	}
	if len(all) > 0 {
		c.Figure = b.number(matrix(all))
	}
	if len(labels) > 0 {
		c.ByLabel = pairs(labels)
	}
	return c
}

// matrix shows the pairs of limbs as a matrix of numbers with bars.
func matrix(list []Pair) *figure {
	limbs := limbs(list)
	t := &table{Caption: "ρ, how far limbs share their timing, with its 95 % interval and p", Head: []string{"limb"}}
	for _, l := range limbs {
		t.Head = append(t.Head, heading(l, "a limb"))
	}
	for _, a := range limbs {
		row := []cell{nameCell(a, "a limb")}
		for _, b := range limbs {
			row = append(row, pairCell(list, a, b))
		}
		t.add(row...)
	}
	return &figure{
		Shown: t,
		Caption: "ρ says how far two limbs share their timing: 1 is one clock for both, 0 each its own. The bar is its 95 % interval on an axis from −1 to 1, with a tick at 0 and a dot at ρ; p is that of a permutation test " +
			"against limbs that keep time by themselves. Synthetic takes are made with these ρ; those below 0 count as 0.",
	}
}

func limbs(list []Pair) []string {
	var out []string
	seen := map[string]bool{}
	for _, p := range list {
		for _, l := range []string{p.A, p.B} {
			if !seen[l] {
				seen[l] = true
				out = append(out, l)
			}
		}
	}
	return out
}

// pairCell writes what is known of two limbs.
func pairCell(list []Pair, a, b string) cell {
	if a == b {
		return cell{Text: "1", Small: "itself", Number: true}
	}
	for _, p := range list {
		if (p.A == a && p.B == b) || (p.A == b && p.B == a) {
			if p.TooFew {
				return cell{Text: "–", Small: fmt.Sprintf("%d takes: too few to tell", p.Takes), Number: true}
			}
			return cell{Text: number(p.Rho), Small: between(p.Low, p.High, number) + "; p " + pValue(p.P), Number: true, Bars: p.bars()}
		}
	}
	return cell{Text: "–", Small: "not measured", Number: true}
}

// bars draws ρ with its interval on an axis from −1 to 1.
func (p Pair) bars() []bar {
	x := linear{-1, 1, 4, 96}
	out := []bar{{classAxis, line(50, 2, 50, 10)}}
	if finite(p.Low) && finite(p.High) {
		out = append(out, bar{classRecorded + " i", line(x.at(p.Low), 6, x.at(p.High), 6)})
	}
	if finite(p.Rho) {
		out = append(out, bar{dotRecorded, dot(x.at(p.Rho), 6)})
	}
	return out
}

// pairs lists pairs of limbs label by label.
func pairs(list []Pair) *table {
	t := &table{Caption: "ρ of pairs of limbs, label by label", Head: []string{"label", "limb", "limb", "ρ", "95 % interval", "p", "takes"}}
	for _, p := range list {
		row := []cell{nameCell(p.Label, "all labels"), nameCell(p.A, "a limb"), nameCell(p.B, "a limb")}
		if p.TooFew {
			row = append(row, figures("–"), figures("too few takes"), figures("–"))
		} else {
			row = append(row, figures(number(p.Rho)), figures(between(p.Low, p.High, number)), figures(pValue(p.P)))
		}
		t.add(append(row, figures(whole(p.Takes)))...)
	}
	return t
}
