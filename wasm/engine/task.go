package engine

import (
	"context"
	"fmt"
	"runtime/debug"
	"sort"
	"strings"
	"sync"
)

// Progress reports how far a task is: fraction in 0…1 and what it is doing.
// It may be called often; reports are thinned on their way to the page.
type Progress = func(fraction float64, what string)

// Task turns a payload into a result. It must not keep payload after it returns.
type Task func(ctx context.Context, payload []byte, progress func(fraction float64, what string)) ([]byte, error)

var (
	tasksMu sync.RWMutex
	tasks   = map[string]Task{}
)

// Register makes a task known by name; it is meant for init functions.
// Two tasks of one name are a mistake of the program, so it panics.
func Register(name string, t Task) {
	tasksMu.Lock()
	defer tasksMu.Unlock()
	if _, taken := tasks[name]; taken || name == "" || t == nil {
		panic(fmt.Sprintf("engine: task %q is registered twice, nameless or nil", name))
	}
	tasks[name] = t
}

// Names lists the registered tasks in alphabetical order.
func Names() []string {
	tasksMu.RLock()
	defer tasksMu.RUnlock()
	names := make([]string, 0, len(tasks))
	for name := range tasks {
		names = append(names, name)
	}
	sort.Strings(names)
	return names
}

// PanicError is what a request returns when its task panicked: a mistake in the
// program, with the place for whoever mends it.
type PanicError struct {
	Task  string
	Value any
	Stack []byte
}

func (e *PanicError) Error() string {
	return fmt.Sprintf("engine: task %s failed inside (%v), this is a mistake in the program", e.Task, e.Value)
}

// Run runs one task here and now and returns its result. An unknown name and a
// panic are errors. A nil progress is allowed.
func Run(ctx context.Context, name string, payload []byte, progress Progress) (result []byte, err error) {
	tasksMu.RLock()
	task := tasks[name]
	tasksMu.RUnlock()
	if task == nil {
		return nil, fmt.Errorf("engine: unknown task (%s), expected one of: %s", name, strings.Join(Names(), ", "))
	}
	if progress == nil {
		progress = func(float64, string) {}
	}
	defer func() {
		if v := recover(); v != nil {
			result, err = nil, &PanicError{Task: name, Value: v, Stack: debug.Stack()}
		}
	}()
	return task(ctx, payload, progress)
}
