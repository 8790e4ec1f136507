package main

import (
	"context"
	"fmt"

	"shakerwatch/acquire/rig"
)

// check prints what a rig file resolves to, or every mistake in it.
func (a *app) check(_ context.Context, args []string) error {
	r, err := rig.Read(args[0])
	if err != nil {
		return unusable(err)
	}
	if err := r.WriteTable(a.stdout); err != nil {
		return err
	}
	if err := computable(r); err != nil {
		fmt.Fprintf(a.stdout, "warning: %v\n", err)
	}
	return nil
}

// computable refuses what a rig file may ask for and this version does not compute.
func computable(r *rig.Rig) error {
	s := r.Analysis
	for _, setting := range []struct{ key, value, computed string }{
		{"excitation", s.Excitation, "random"},
		{"averaging", s.Averaging, "linear"},
		{"estimator", s.Estimator, "h1"},
	} {
		if setting.value != setting.computed {
			return fmt.Errorf("%s: %s = %q is not computed by this version: choose %q", r.Path, setting.key, setting.value, setting.computed)
		}
	}
	return nil
}
