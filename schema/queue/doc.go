// Package queue hands the tiles of a run to its workers, over NATS
// JetStream.
//
// Words: a job is the message that carries one tile; a delivery is one
// handing out of a job; an attempt is a delivery, counted from 1; a queue is
// the stream of one run. A job needs nothing but itself to be solved.
//
// What it promises: a job that was published is delivered again and again
// until a worker confirms it, refuses it, or it has been delivered as often
// as Options allow; it never promises to deliver a job only once. Whatever
// is done with a job must therefore be harmless when done twice, as storing
// a part under the hash of its tile is. Messages carry an id made of their
// content, and the server drops a second one that arrives within its
// window: that saves work and proves nothing.
//
// Embed runs a server inside the process, without an open port, and Connect
// reaches one elsewhere. From the connection on, both are the same code.
package queue
