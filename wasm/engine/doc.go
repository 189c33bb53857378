// Package engine runs long calculations away from the page.
//
// In the browser it is the program's second life: the same binary, started in a
// Web Worker, where no document exists. The page sends a request (task name and
// payload), the engine answers with progress reports and one result or error.
//
// A task is a plain function from bytes to bytes; what the bytes mean is agreed
// between the task and whoever calls it. Every request is recovered: a panic in
// a task becomes an error of that request and the engine lives on. Cancelling is
// cooperative: the context ends, and the task is expected to look at it. In the
// browser a cancel can only arrive while a task yields, so progress yields now
// and then; a task that does neither is ended by the page together with its
// worker.
//
// The part without JavaScript is this package's Server; it runs natively too.
//
//	engine.Register("square", func(ctx context.Context, in []byte, progress engine.Progress) ([]byte, error) { … })
//	out, err := engine.Run(ctx, "square", in, nil)
package engine
