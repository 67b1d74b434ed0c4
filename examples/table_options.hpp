// The options of the examples that print tables of many runs: compare and faults.
#pragma once

#include <algorithm>
#include <cstddef>
#include <cstdio>
#include <cstdlib>
#include <exception>
#include <string>
#include <thread>
#include <vector>

#include <getopt.h>

#include "whole_number.hpp"

namespace table {

struct Options {
  std::string map;  ///< a file with a stand of trees; empty for the program's own scene
  int runs = 20;
  bool markdown = false;
};

/// Reads the options, or ends the program: with exit code 0 after --help, with 2 after one line that says what is
/// wrong.
inline Options read_options(char const* program, char const* usage, int argc, char** argv) {
  Options options;
  option const known[] = {{"map", required_argument, nullptr, 'm'},
                          {"runs", required_argument, nullptr, 'n'},
                          {"markdown", no_argument, nullptr, 'd'},
                          {"help", no_argument, nullptr, 'h'},
                          {nullptr, 0, nullptr, 0}};
  for (int given = 0; (given = getopt_long(argc, argv, "", known, nullptr)) != -1;) {
    switch (given) {
      case 'm': options.map = optarg; break;
      case 'd': options.markdown = true; break;
      case 'n': options.runs = static_cast<int>(whole_number(program, "--runs", optarg, 1, 10000)); break;
      case 'h': std::fputs(usage, stdout); std::exit(0);
      default: std::fputs(usage, stderr); std::exit(2);
    }
  }
  if (optind != argc) {
    std::fprintf(stderr, "%s: did not expect '%s'\n%s", program, argv[optind], usage);
    std::exit(2);
  }
  return options;
}

/// Runs the program's work; what it throws is one line on stderr and exit code 2.
template <typename Work>
int run(char const* program, Work const& work) {
  try {
    return work();
  } catch (std::exception const& error) {
    std::fprintf(stderr, "%s: %s\n", program, error.what());
    return 2;
  }
}

/// Calls work(i) for i from 0 to count - 1, shared out among the machine's cores, and waits.
template <typename Work>
void share_out(std::size_t count, Work const& work) {
  std::size_t const threads = std::max(1U, std::thread::hardware_concurrency());
  std::vector<std::jthread> crew;
  for (std::size_t t = 0; t < threads; ++t) {
    crew.emplace_back([&, t] {
      for (std::size_t i = t; i < count; i += threads) {
        work(i);
      }
    });
  }
}

}  // namespace table
