package export

import (
	"cmp"
	"errors"
	"fmt"
	"net/url"
	"time"
)

// About is what only the people behind a set can say of it. It stands in the
// manifest, in croissant.json and in CARD.md; what is not stated is left out
// there, never invented.
type About struct {
	Title     string `json:"title,omitempty"`     // name of the set
	Creator   string `json:"creator,omitempty"`   // the person or body that answers for it
	Licence   string `json:"licence,omitempty"`   // URL of the licence it is given under
	URL       string `json:"url,omitempty"`       // of the page it is found at
	Published string `json:"published,omitempty"` // the day it was published, 2026-12-31
}

// Validate reports every value that cannot stand.
func (a About) Validate() error {
	var errs []error
	for _, u := range []struct{ what, text, as string }{
		{"licence", a.Licence, "https://spdx.org/licenses/CC-BY-4.0.html"},
		{"url", a.URL, "https://example.org/gestures"},
	} {
		if u.text == "" {
			continue
		}
		if parsed, err := url.Parse(u.text); err != nil || !parsed.IsAbs() || parsed.Host == "" {
			errs = append(errs, fmt.Errorf("the %s %q is no URL; write one such as %s", u.what, u.text, u.as))
		}
	}
	if a.Published != "" {
		if _, err := time.Parse(time.DateOnly, a.Published); err != nil {
			errs = append(errs, fmt.Errorf("the day of publication %q is no date; write one such as 2026-12-31", a.Published))
		}
	}
	return errors.Join(errs...)
}

// Missing lists the keys, by their names in About, that the Croissant standard
// wants of a published set and that are not stated.
func (a About) Missing() []string {
	var out []string
	for _, v := range []struct{ key, text string }{
		{"creator", a.Creator}, {"licence", a.Licence}, {"url", a.URL}, {"published", a.Published},
	} {
		if v.text == "" {
			out = append(out, v.key)
		}
	}
	return out
}

// title returns the name of the set.
func (a About) title() string { return cmp.Or(a.Title, "A set of gesture takes") }
