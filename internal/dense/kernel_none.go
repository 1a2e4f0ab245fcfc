//go:build noasm || !(amd64 || arm64)

package dense

// kernels lists what this processor can run.
func kernels() []*kernel { return nil }
