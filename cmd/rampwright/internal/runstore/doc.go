// Package runstore keeps the folder a run writes its result into, and the
// ledger of exact evaluations that lets a killed run resume.
//
// A run with result folder DIR works in DIR.part and shows nothing in DIR until
// it has everything:
//
//	DIR           the last finished result, whole at every moment but the swap
//	DIR.part      the run at work: mark, ledger.jsonl, the files written so far
//	DIR.previous  the result before the last one
//	DIR.discard   only between the steps of a swap: what DIR.previous held before
//	DIR.lock      held while a run works; the system frees it when the run dies
//
// Every folder carries a mark, a small file that names the program, the title
// and the brief. Only a marked folder of the same title, or an empty one, is
// ever replaced; anything else is refused with *Refused and left untouched.
package runstore
