// Package logic is the switching automaton.
package logic
