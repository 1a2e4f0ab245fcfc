// Package crossval says who is held out and who may be exchanged.
package crossval
