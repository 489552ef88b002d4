// Package store keeps the durable files of a run under names: parts, the
// records of tiles that were set aside, the records of messages that were
// refused.
//
// Words: a name is a path of lower-case letters, digits, dots, underscores
// and hyphens with slashes between; a part is stored under Part, a tile set
// aside under Aside, a refused message under Refused.
//
// What every Store promises: a Put that has returned survives the loss of
// the process and of the machine's power; no reader ever sees half of it;
// what stands under a name first stays there, so a second Put of the same
// content changes nothing; nothing outside the store can be named. Package
// storetest holds the suite that each Store passes.
//
// Folder is the store on a local or shared file system. While it writes, it
// holds a lock on its temporary file, which the kernel releases when the
// process dies: Clean removes exactly the files whose writer is gone.
package store
