#!/bin/sh
# A second reader of the core, at the level at which it is quiet unless it has found something.
set -eu
cppcheck --quiet --std=c11 --error-exitcode=1 --enable=warning,portability --inline-suppr --suppress=missingIncludeSystem \
    -Icore core
