// Catch2 in version 2 (Debian 12, Ubuntu 22.04) or 3 (later ones) under one name.
#pragma once

#if __has_include(<catch2/catch_all.hpp>)
#include <catch2/catch_all.hpp>
using Catch::Approx;
#else
#include <catch2/catch.hpp>
#endif
