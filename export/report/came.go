package report

import (
	"cmp"
	"fmt"
	"slices"

	"strandwise/channels"
)

// came is the section on what went in.
type came struct {
	Missing  string
	Text     string
	Labels   *table
	Subjects *table // takes by label and subject
	Repairs  *table
	Repaired string // in place of the table
}

// mostSubjects is how many subjects have a column of their own.
const mostSubjects = 24

func (b *builder) came() came {
	var c came
	if len(b.in.Counts) == 0 {
		c.Missing = missing("Takes were not counted", "")
	} else {
		c.Text = b.told()
		c.Labels = b.labelCounts()
		c.Subjects = b.subjectCounts()
	}
	c.Repairs, c.Repaired = b.repairs()
	return c
}

// told sums the counts up in a sentence.
func (b *builder) told() string {
	var train, test, synthetic int
	subjects := map[string]bool{}
	for _, c := range b.in.Counts {
		if c.Split == channels.Test {
			test += c.Recorded
		} else {
			train += c.Recorded
		}
		synthetic += c.Synthetic
		if c.Subject != "" {
			subjects[c.Subject] = true
		}
	}
	people := "whose subjects are not stated"
	if n := len(subjects); n > 0 {
		people = "of " + counted(n, "subject", "subjects")
	}
	return fmt.Sprintf("%s, %s %s: %s to train with and %s kept for the test. %s made from the former.",
		counted(len(b.labels), "label", "labels"), counted(train+test, "recorded take", "recorded takes"), people, whole(train), whole(test), counted(synthetic, "synthetic take was", "synthetic takes were"))
}

// labelCounts counts takes by label.
func (b *builder) labelCounts() *table {
	t := &table{Caption: "Takes of each label", Head: []string{"no.", "label", "recorded, training", "recorded, test", "synthetic", "subjects"}}
	for i, label := range b.labels {
		var train, test, synthetic int
		subjects := map[string]bool{}
		for _, c := range b.in.Counts {
			if c.Label != label {
				continue
			}
			if c.Split == channels.Test {
				test += c.Recorded
			} else {
				train += c.Recorded
			}
			synthetic += c.Synthetic
			if c.Subject != "" {
				subjects[c.Subject] = true
			}
		}
		t.add(text(fmt.Sprint(i+1)), b.linked(label), figures(whole(train)), figures(whole(test)), figures(whole(synthetic)), figures(whole(len(subjects))))
	}
	return t
}

// subjectCounts counts recorded takes by label and subject; nil where no
// subject is named.
func (b *builder) subjectCounts() *table {
	total, counts := map[string]int{}, map[[2]string]int{}
	for _, c := range b.in.Counts {
		total[c.Subject] += c.Recorded
		counts[[2]string{c.Label, c.Subject}] += c.Recorded
	}
	var subjects []string
	for s := range total {
		subjects = append(subjects, s)
	}
	if len(subjects) == 0 || len(subjects) == 1 && subjects[0] == "" {
		return nil
	}
	slices.SortFunc(subjects, func(a, b string) int { return cmp.Or(cmp.Compare(total[b], total[a]), cmp.Compare(a, b)) })
	shown := subjects[:min(len(subjects), mostSubjects)]
	t := &table{Caption: "Recorded takes of each label by each subject, those with most takes first", Head: []string{"label"}}
	for _, s := range shown {
		t.Head = append(t.Head, heading(s, "not stated"))
	}
	if n := len(subjects) - len(shown); n > 0 {
		t.Head = append(t.Head, counted(n, "other", "others"))
	}
	for _, label := range b.labels {
		row, others := []cell{b.linked(label)}, 0
		for i, s := range subjects {
			if n := counts[[2]string{label, s}]; i < len(shown) {
				row = append(row, figures(whole(n)))
			} else {
				others += n
			}
		}
		if len(subjects) > len(shown) {
			row = append(row, figures(whole(others)))
		}
		t.add(row...)
	}
	return t
}

// repairs lists what was put right.
func (b *builder) repairs() (*table, string) {
	t := &table{Caption: "Faults put right", Head: []string{"fault", "times"}}
	for _, r := range b.in.Repairs {
		if r.Count != 0 {
			t.add(text(r.What), figures(whole(r.Count)))
		}
	}
	switch {
	case len(t.Rows) > 0:
		return t, ""
	case len(b.in.Repairs) > 0 && b.in.Absent.Repairs == "":
		return nil, "Nothing had to be repaired in the recordings."
	}
	return nil, missing("No repairs are on record", b.in.Absent.Repairs)
}
