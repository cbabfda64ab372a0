// Package studies makes studies of scenarios and writes down what they show: as
// JSON, as tables with one row a trial, as JUnit XML and as pictures. The studies
// themselves are those of sim/study, which knows nothing of files.
//
// # Basics
//
// [New] takes a scenario and gives the source of its trials; [Subject.Family]
// gives the sources of its settings. The results of a study go into [Trials],
// [Sweep] and their neighbours, which are what JSON holds, with units in the
// names; null stands for what does not exist or has no bound.
//
// # Reading the source
//
// subject.go is the way in, floors.go that of generated floors; part.go packs results for a
// store; view.go and json.go are what is printed as JSON, csv.go the
// table, junit.go the report for build servers; svg.go is the pen, and chart.go and
// auditchart.go are the pictures.
package studies
