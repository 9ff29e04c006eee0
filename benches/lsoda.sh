#!/usr/bin/env bash
# How fast and how exact is the kernel beside an adaptive solver, SciPy's LSODA?
#
# Runs the kernel benchmark, then the same 80 days with LSODA and with a DOP853 reference, and prints one table.
# Needs Python 3.11 or newer; SciPy goes into a virtual environment under target/.
#
#   benches/lsoda.sh           runs the benchmark first
#   benches/lsoda.sh FILE      takes saved output of the benchmark instead
set -euo pipefail

saved=""
if [ "$#" -ge 1 ]; then
    saved="$(realpath -- "$1")"
    [ -r "$saved" ] || { echo "lsoda.sh: cannot read $1" >&2; exit 1; }
fi
cd "$(dirname -- "${BASH_SOURCE[0]}")/.."

scipy="1.17.1"
venv="target/lsoda-venv"
python="$venv/bin/python"

has_scipy() {
    "$python" -c "import scipy, sys; sys.exit(scipy.__version__ != '$scipy')" 2>/dev/null
}

if ! has_scipy; then
    if ! { python3 -m venv "$venv" && "$python" -m pip install --quiet --disable-pip-version-check "scipy==$scipy"; }; then
        echo "lsoda.sh: could not install scipy $scipy into $venv (Python 3.11 or newer, its venv module and a network are needed)." >&2
        echo "lsoda.sh: put that version there by hand, or run benches/lsoda.py FILE with a Python that has SciPy." >&2
        exit 1
    fi
fi

if [ -n "$saved" ]; then
    bench="$saved"
else
    bench="$(mktemp)"
    trap 'rm -f -- "$bench"' EXIT
    cargo bench --no-default-features --bench kernel >"$bench"
fi

# One core for both: no thread pool of a linear algebra library.
OMP_NUM_THREADS=1 OPENBLAS_NUM_THREADS=1 "$python" benches/lsoda.py "$bench"
