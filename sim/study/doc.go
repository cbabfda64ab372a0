// Package study answers questions about a design by many runs: how often does it do
// what is asked, what does each simplification cost, how fast may it go, which
// numbers suit it best.
//
// # Basics
//
// A [Source] draws trials: the i-th is the same whenever it is asked for. A
// [Runner] runs them on all cores. On these stand the studies:
//
//   - [RunTrials]: how often it does what is asked, and how it fails;
//   - [RunSweep]: the same over settings of one or more numbers;
//   - [RunCompare]: two or more designs on the same trials;
//   - [RunAudit]: what each idealisation of the model hides;
//   - [RunLimit]: how far a number may go;
//   - [RunTune]: numbers that suit best;
//   - [RunCheck]: a verdict on what is asked.
//
// # The same result, however it is run
//
// A result has its place by its number, and whatever is computed from results goes
// through them in that order. A study decides what to run next only from results
// that are complete up to a number fixed in advance. So its outcome is the same bit
// for bit on one worker or many, in one go or from parts that were kept
// ([Runner.Known], [Runner.Keep]).
//
// # Caveats
//
// A run that panics, or diverges, counts as one that does not do what is asked; it
// is reported with its trial and seed, and the study goes on. A trial that cannot be
// drawn ends the study: the scenario is at fault.
//
// When its context ends, a study returns what is known so far and the context's
// error.
package study
