package main

import (
	"context"

	"shakerwatch/acquire/rig"
)

// check prints what a rig file resolves to, or every mistake in it.
func (a *app) check(_ context.Context, args []string) error {
	r, err := rig.Read(args[0])
	if err != nil {
		return unusable(err)
	}
	return r.WriteTable(a.stdout)
}
