package food

import (
	"flag"

	_ "pgregory.net/rapid" // brings the flag
)

// The property tests draw the same cases at every run, so that a change is what turns them red; go test -rapid.seed=N draws others.
func init() { _ = flag.Set("rapid.seed", "20260131") }
