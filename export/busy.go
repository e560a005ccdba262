package export

import "errors"

// ErrBusy is the error of [Create] and [Seal], and what else needs a set alone,
// when another process is writing it.
var ErrBusy = errors.New("another process is writing this set")
