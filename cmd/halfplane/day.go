package main

import (
	"fmt"
	"time"

	"github.com/spf13/cobra"
)

// day is the flag --today DATE: the day on which waivers are judged, the local date unless it is given.
type day struct{ date *time.Time }

func addDay(cmd *cobra.Command) day {
	now := time.Now()
	d := day{&now}
	cmd.Flags().Var(&d, "today", "day on which waivers are judged, YYYY-MM-DD (default the local date)")
	cmd.Flag("today").DefValue = "" // the help is the same every day
	return d
}

// String is the day as YYYY-MM-DD.
func (d *day) String() string {
	if d.date == nil {
		return ""
	}
	return d.date.Format(time.DateOnly)
}

func (d *day) Type() string { return "DATE" }

// Set reads YYYY-MM-DD.
func (d *day) Set(text string) error {
	date, err := time.Parse(time.DateOnly, text)
	if err != nil {
		return fmt.Errorf("expects a date such as 2027-03-31")
	}
	*d.date = date
	return nil
}
