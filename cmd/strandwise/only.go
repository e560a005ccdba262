package main

import (
	"github.com/spf13/cobra"

	"strandwise/channels"
	"strandwise/cmd/internal/job"
)

// onlyTake is one synthetic take as a JSON object.
type onlyTake struct {
	ID         string             `json:"id"`
	Label      string             `json:"label"`
	Subject    string             `json:"subject"`
	Session    string             `json:"session"`
	Source     string             `json:"source"`
	Draw       int                `json:"draw"`
	Rank       int                `json:"rank"`
	Method     string             `json:"method"`
	Parameters map[string]float64 `json:"parameters"`
	Channels   []string           `json:"channels"`
	Time       []float64          `json:"time_s"`
	Values     [][]float64        `json:"values"` // one list per frame, in the order of the channels
}

// growOnly makes one synthetic take again and writes it as a recording: to
// standard output as CSV, unless a file is named on the command line.
func growOnly(c *cobra.Command, s Streams, plan *job.Plan, id string, asJSON bool) error {
	t, err := plan.Only(c.Context(), s.In, id, job.Version(), newBar(s), noticeTo(s.Err))
	if err != nil {
		return err
	}
	if asJSON {
		return printJSON(s.Out, described(t))
	}
	o := job.Conversion{Out: "-", As: "csv", Version: job.Version()}
	if c.Flags().Changed("out") && plan.Out != "-" {
		o.Out, o.As = plan.Out, ""
	}
	return job.WriteTake(c.Context(), t, s.Out, o)
}

func described(t *channels.Take) onlyTake {
	out := onlyTake{
		ID: t.ID, Label: t.Label, Subject: t.Subject, Session: t.Session, Channels: t.Layout.Names(), Time: t.Time,
		Source: t.Made.Source, Draw: t.Made.Draw, Rank: t.Made.Rank, Method: t.Made.Method, Parameters: t.Made.Parameters,
	}
	for i := range t.Frames() {
		out.Values = append(out.Values, t.Frame(i))
	}
	return out
}
