// Package store keeps artifacts, step records and intermediate results beside
// a job, addressed by content, so that a step whose inputs are unchanged is
// not run again.
//
//	.hushframe/
//	  artifacts/HASH/        an artifact, under its content hash
//	  steps/KEY/RECORD.json  outcomes of a step, each with the files it used
//	  kept/KEY/              an intermediate result of a stage
//	  runs/NAME.json         the last run of each job, and the ids of those before
//	  runs/id/ID.json        a run by the content hash of its account
//	  runs/named/LABEL.json  a run that was given a label; prune leaves it alone
//	  scratch/ID/            work in progress of one run
//	  lock, scratch.lock     see below
//
// The key of a step is the hash of the stage's name, the checksum of its
// executable, its arguments and the content hashes of its inputs. Which files
// it reads and which extensions it calls is known only afterwards; so each
// record under the key lists them with their hashes, also the files it looked
// for in vain, and a record counts when all are still the same.
//
// Everything is filled in scratch, flushed to the disk and then renamed into
// place, records last. A record is named by the hash of its own text. So what
// a killed run leaves behind is scratch, which the next run removes, or an
// artifact that no record names yet. Several runs may share a store: each
// holds lock shared, and Prune holds it alone; each owns a folder in scratch
// with a lock of its own, made and cleaned up under scratch.lock.
package store
