// Package polewright is the map of the library; the code is in its subpackages.
package polewright
