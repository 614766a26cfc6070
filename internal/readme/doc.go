// Package readme holds the README to its word: its code compiles and prints what it says, and
// its commands are those that the CI script runs.
package readme
