// Package job reads job files: HCL text in, a checked job out.
//
// A job is one file or a folder of *.hcl files with one block
// job "name" {}, and any number of setting, stage and requirement blocks.
// Load checks everything that can be checked before a stage runs and gathers
// every mistake with its place; it starts nothing but the descriptions of the
// stages that the job names.
//
// Expressions refer to setting.NAME, job.name, stage.LABEL.OUTPUT (an artifact)
// and stage.LABEL.figures.FIGURE. A figure is unknown until its stage has run;
// until then it is checked by its declared type. So a stage is evaluated twice:
// with no figures by Load, and with those of the stages it needs before it
// runs.
//
// Quantities are texts with a unit in the file and become quantities at the
// argument that takes them. A figure of a quantity type and the result of
// quantity() are values of their own, one type per dimension: they can be
// compared with each other and with texts, and written into texts, but not
// added or multiplied; the message then names number_in() and quantity().
//
// A mistake in a file is a diagnostic. A mistake of this program is a panic.
package job
