//go:build !unix

package template_test

import "time"

var began = time.Now()

// processTime returns the time since the tests began, for want of a clock of the
// process.
func processTime() time.Duration { return time.Since(began) }
