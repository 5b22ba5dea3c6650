#!/usr/bin/env bash
# Every bench, one after the other on one machine in one run. Property speed stands beside a reference
# library where a Python that has it is given: PYTHON=/path/to/python benches/run.sh
set -euo pipefail
cd "$(dirname "$0")/.."
export CARGO_TERM_COLOR=never CARGO_TERM_QUIET=true

printf '== machine\n'
uname -srm
nproc
uptime
printf '\n== a check in the library\n'
cargo bench --no-default-features --bench check
printf '\n== a check over HTTP\n'
cargo bench --bench service
printf '\n== property states beside a reference library\n'
python=${PYTHON:-python3}
if "$python" -c 'import CoolProp' 2>/dev/null; then
    "$python" benches/property_speed.py
else
    printf 'left out: %s has no CoolProp\n' "$python"
fi
printf '\n== machine\n'
uptime
