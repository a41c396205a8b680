// Package allot plans a job: many boards of several stages from one drawer. It
// reads the job file, takes the fixed lines first, chooses a fit for every
// stage so that all boards can be built, and says what is short where they
// cannot.
package allot
