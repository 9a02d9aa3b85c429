#!/usr/bin/env bash
# usage: sample-sheets/show.sh
# From a fresh machine to the report of the kiln sheet: installs the Debian packages that are missing, builds the
# extension, analyses sample-sheets/kiln.fods in a headless office of its own, and prints the verdicts.
# Leaves build/show/kiln-report.ods and build/show/kiln-report.pdf.
set -euo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")/.."

build=build/show
.ci/need_packages g++ cmake ninja-build libeigen3-dev libboost-dev libreoffice-dev \
  "libreoffice-calc-nogui|libreoffice-calc" python3-uno fonts-dejavu-core

cmake --preset release -B "$build" -DUNPLY_TESTS=OFF >/dev/null
cmake --build "$build" --parallel "$(nproc)"

/usr/bin/python3 extension/runner/unply_run.py --extension "$build/unply.oxt" sample-sheets/kiln.fods \
  --output "$build/kiln-report.ods" --pdf "$build/kiln-report.pdf" --replace
echo
echo "Report: $build/kiln-report.ods and $build/kiln-report.pdf"
