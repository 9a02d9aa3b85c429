#!/usr/bin/env bash
# usage: tests/run.sh
# Installs the Debian packages that the tests need where they are missing, builds the dev preset, and runs every test.
# Last line: "N passed, N failed"; ends with 1 when any failed. A test that could not be run counts as failed.
set -euo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")/.."

.ci/need_packages g++ cmake ninja-build libeigen3-dev libboost-dev libreoffice-dev \
  "libreoffice-calc-nogui|libreoffice-calc" python3-uno catch2 poppler-utils fonts-dejavu-core

cmake --preset dev
cmake --build --preset dev --parallel "$(nproc)"
.ci/run_tests dev "$@"
