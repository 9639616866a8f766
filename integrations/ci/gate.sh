#!/bin/sh
# The whole gate in one job: gate.sh [PATH…]. Findings go to standard output, the reports into the folder for them.
# Exit status: that of 'halfplane check'.
set -eu
here=$(dirname "$0")
. "$here/settings.sh"

judged --depth "$depth" ${policy:+--policy "$policy"} ${since:+--since "$since"} "$@"
